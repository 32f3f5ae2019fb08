/** Ids in the order the form shows them. */
export const measureIds = ['ispc'] as const;
