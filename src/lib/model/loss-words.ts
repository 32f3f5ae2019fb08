import type { LossReason } from '$engine';

/** Why an epoch was left out, in the words of tables and captions. */
export const lossWords: Record<LossReason, string> = {
  'guard-leaves-recording': 'guard leaves the recording',
  'crosses-gap': 'crosses a gap',
  'above-limit': 'above the limit',
  flat: 'flat',
  'by-hand': 'marked by hand',
};
