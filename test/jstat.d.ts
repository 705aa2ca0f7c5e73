/** The part of jstat that the tests use; the package brings no types. */
declare module 'jstat' {
  const jstat: {
    /** Regularised lower incomplete gamma function P(a, x). */
    lowRegGamma(a: number, x: number): number;
    gammaln(x: number): number;
    normal: { cdf(x: number, mean: number, deviation: number): number };
    chisquare: { cdf(x: number, degreesOfFreedom: number): number };
  };
  export default jstat;
}
