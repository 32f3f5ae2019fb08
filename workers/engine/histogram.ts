/** Bins of each feature's null in z units; values beyond the ends go to the outer bins. */
export const histogramBins = { count: 24, from: -6, to: 6, width: 0.5 } as const;
