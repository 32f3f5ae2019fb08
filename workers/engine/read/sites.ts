import { sitePositions } from './positions';

/** Names of the 10-20 system that the 10-10 system replaced. */
const OLD_NAMES: Record<string, string> = { T3: 'T7', T4: 'T8', T5: 'P7', T6: 'P8' };

/** Ears and mastoids: names of sites that references use; without a place by the percentages. */
const EARS = ['A1', 'A2', 'M1', 'M2'];

const CANONICAL = new Map(
  [...sitePositions.keys(), ...EARS].map((site) => [site.toUpperCase(), site]),
);
for (const [old, site] of Object.entries(OLD_NAMES)) CANONICAL.set(old, site);

/** What may stand behind a site as its reference ("Fp1-A2", "EEG FC5-REF"). */
const REFERENCE =
  /^(REF\d?|A1|A2|A1A2|A1\+A2|M1|M2|M1M2|M1\+M2|LE|LER|AV|AVG|AVE|AVERAGE|CAR|CLE|LM|G\d+|NZ|NOSE)$/;
const PREFIX = /^(EEG|ELECTRODE|CHAN|CHANNEL)[\s:_-]+/i;

function canonicalSite(text: string): string | null {
  return CANONICAL.get(text.toUpperCase()) ?? null;
}

/**
 * The 10-20/10-10 site that a label stands for ("Fc5.", "EEG FC5-REF", "fc5" are FC5; the old
 * names T3, T4, T5, T6 are T7, T8, P7, P8), or null. A difference of two scalp sites ("Fp1-F7")
 * is no site.
 */
export function siteOf(label: string): string | null {
  const plain = label
    .trim()
    .replace(PREFIX, '')
    .replace(/[.\s]+$/, '');
  const whole = canonicalSite(plain);
  if (whole !== null) return whole;
  const parted = /^([A-Za-z]{1,3}\d{0,2})\s*[-:/_\s]\s*(.+)$/.exec(plain);
  if (parted && REFERENCE.test(parted[2].trim().toUpperCase())) return canonicalSite(parted[1]);
  const joined = /^([A-Za-z]{1,2}\d)([AM][12])$/i.exec(plain);
  return joined ? canonicalSite(joined[1]) : null;
}

/** A site's place, by the label, or null where it has none. */
export function positionOfSite(site: string) {
  return sitePositions.get(site) ?? null;
}
