/** The part of jStat that the tests use; the package has no types of its own. */
declare module 'jstat' {
  const jStat: {
    beta: { cdf(x: number, alpha: number, beta: number): number };
  };
  export default jStat;
}
