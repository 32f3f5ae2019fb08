export const correctionIds = ['max-statistic', 'cluster-mass', 'benjamini-hochberg'] as const;
