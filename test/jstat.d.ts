/** The part of jstat that the tests use; the package brings no types. */
declare module 'jstat' {
  const jstat: {
    /** Regularised lower incomplete gamma function P(a, x). */
    lowRegGamma(a: number, x: number): number;
    gammaln(x: number): number;
    mean(values: readonly number[]): number;
    variance(values: readonly number[], isSample?: boolean): number;
    models: { ols(values: readonly number[], terms: readonly (readonly number[])[]): { coef: number[] } };
    normal: {
      cdf(x: number, mean: number, deviation: number): number;
      pdf(x: number, mean: number, deviation: number): number;
    };
    chisquare: { cdf(x: number, degreesOfFreedom: number): number };
  };
  export default jstat;
}
