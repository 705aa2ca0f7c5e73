/** A zero between two points at which a function has different signs. */

/** x in [a, b] with f(x) = 0, to a relative `tolerance`: false position that halves the weight of an end kept
 * twice (the Illinois method).
 * Source: G. Dahlquist and A. Bjorck, Numerical Methods, 6.2 (cited from memory)
 * @param fa, fb f(a) and f(b), of different sign
 */
export function bracketedRoot(
  f: (x: number) => number,
  a: number,
  b: number,
  fa: number,
  fb: number,
  tolerance: number,
): number {
  let [x0, f0, x1, f1] = [a, fa, b, fb];
  let x = b;
  for (let turn = 0; turn < 100; turn++) {
    x = x1 - (f1 * (x1 - x0)) / (f1 - f0);
    const fx = f(x);
    if (fx === 0 || Math.abs(x - x1) <= tolerance * Math.abs(x)) return x;
    if (fx * f1 < 0) {
      x0 = x1;
      f0 = f1;
    } else {
      f0 *= 0.5;
    }
    x1 = x;
    f1 = fx;
  }
  return x;
}
