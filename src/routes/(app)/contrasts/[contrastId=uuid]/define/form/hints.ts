/** One sentence for each choice that a name alone does not explain. */
export const hints = {
  participant: 'A plan is about one participant; its conditions may come from several recordings.',
  window:
    'The stretch around each event that is analysed. Guard samples on both sides protect its edges from the filter, so an event close to the end of a recording is left out.',
  detrend:
    'What is taken out of each epoch before its phases: its mean, or its straight line, which also removes slow drift.',
  reference:
    'Phases depend on the reference. A shared reference makes sites look alike; the mean of all analysed sites is fairest with many well-spread sites; the surface Laplacian needs no reference and damps what spreads far, but needs positions and dense sites.',
  aboveUv:
    'An epoch is left out when any analysed site swings more than this within the window, from lowest to highest sample. Empty: no limit.',
  flatBelowUv:
    'An epoch is left out when any analysed site swings less than this within the window: a loose electrode. Empty: no limit.',
  sites: 'Sites marked bad in a recording are left out unless you choose them.',
  pairs: 'Fewer pairs are fewer tests, so smaller differences can survive the correction.',
  spacing: 'Log spacing puts the same number of steps into each doubling of frequency.',
  times:
    'Moments at which synchrony is measured, in seconds from the event. Closer than the kernel is wide, they are not separate findings.',
  tail: 'Two-sided finds differences either way; a one-sided test must be chosen before the data are seen.',
  alpha: 'The chance of a false claim that you accept, over the whole map.',
  permutations:
    'How often the null is drawn. The smallest p is one in this number plus one, and claims near alpha need many.',
  corrections:
    'How the many tests are paid for. The first one carries the claim; the result page can show the others beside it.',
  clusterFormingZ:
    'Neighbouring points whose z is beyond this join a cluster. It shapes what clusters can be found, not how often a false one is.',
  seed: 'Any text. The same plan, seed and recordings give the same numbers anywhere.',
} as const;

export type HintId = keyof typeof hints;
