/** A code, never a name; the database holds the same rule. */
export const participantCodePattern = /^[A-Za-z0-9_-]{1,40}$/;
export const participantCodeRule =
  'A code has 1 to 40 letters, digits, "-" or "_", and is never a name.';
