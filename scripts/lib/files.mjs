import { existsSync, readdirSync, statSync } from 'node:fs';
import path from 'node:path';

/** Every file at or below a place, in the order of names. */
export function* filesBelow(place) {
  if (!existsSync(place)) return;
  if (statSync(place).isFile()) yield place;
  else for (const name of readdirSync(place).sort()) yield* filesBelow(path.join(place, name));
}
