/** Something the caller gave that cannot be used; the message names it, its value and the remedy. */
export class InputError extends Error {
  override readonly name = 'InputError';
}
