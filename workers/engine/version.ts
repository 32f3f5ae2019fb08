/** Part of every digest: raise it when any number the engine makes can change. */
export const engineVersion = '2';
