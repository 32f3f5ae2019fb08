const words = [
  'alder', 'amber', 'basalt', 'birch', 'cedar', 'cobalt', 'delta', 'ember', 'fathom', 'fjord',
  'granite', 'harbour', 'heron', 'indigo', 'juniper', 'kelp', 'lagoon', 'larch', 'marble', 'meadow',
  'nectar', 'ochre', 'pebble', 'quartz', 'reed', 'river', 'saffron', 'sedge', 'slate', 'tide',
  'umber', 'willow',
]; // prettier-ignore

/** A seed that is easy to read out loud; any other text serves as well. */
export function suggestSeed(): string {
  const [first, second] = crypto.getRandomValues(new Uint32Array(2));
  return `${words[first % words.length]}-${second % 10_000}`;
}
