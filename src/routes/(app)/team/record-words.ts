const longestDetail = 60;
// The database keeps no order of a detail's values; these come first, the others after them.
const leading = ['name', 'email', 'from', 'to'];

/** "recording.uploaded" as "Recording uploaded": actions are named so that this reads well. */
export function actionWords(action: string): string {
  const words = action.replaceAll(/[.-]/g, ' ');
  return words.charAt(0).toUpperCase() + words.slice(1);
}

/** "name Cued against free, from viewer": plain values of the detail, long ones cut. */
export function detailWords(detail: Record<string, unknown>): string {
  return Object.entries(detail)
    .filter(([, value]) => ['string', 'number', 'boolean'].includes(typeof value))
    .sort(([x], [y]) => rank(x) - rank(y))
    .map(([name, value]) => `${splitWords(name)} ${shorten(String(value))}`)
    .join(', ');
}

function rank(name: string): number {
  const place = leading.indexOf(name);
  return place < 0 ? leading.length : place;
}

/** "sizeBytes" as "size bytes". */
function splitWords(name: string): string {
  return name.replaceAll(/([A-Z])/g, (letter) => ` ${letter.toLowerCase()}`);
}

function shorten(text: string): string {
  // A hash is recognised by its beginning.
  if (/^[0-9a-f]{64}$/.test(text)) return text.slice(0, 8);
  return text.length > longestDetail ? `${text.slice(0, longestDetail - 1)}…` : text;
}
