/** The highest point of a function between bounds, by its values alone. */

const GOLDEN = (Math.sqrt(5) - 1) / 2;

/** A place and the value there. */
export interface Peak {
  x: number;
  value: number;
}

/** The maximum of a function with one peak in [from, to], by golden-section search: it needs no slope, so creases do not stop it.
 * Where there are more peaks it finds one of them.
 *
 * Source: J. Kiefer, Proc. Am. Math. Soc. 4 (1953) 502 (cited from memory)
 * @param f its second argument is a floor: where the value is at or below it, any number there will do
 * @param tolerance the length of the interval to stop at
 */
export function goldenMaximum(
  f: (x: number, floor: number) => number,
  from: number,
  to: number,
  tolerance: number,
): Peak {
  let [a, b] = [from, to];
  const at = (x: number, floor: number): Peak => ({ x, value: f(x, floor) });
  let low = at(b - GOLDEN * (b - a), Number.NEGATIVE_INFINITY);
  let high = at(a + GOLDEN * (b - a), low.value);
  while (b - a > tolerance) {
    // the higher of the two is kept, so its value is exact
    if (low.value >= high.value) {
      b = high.x;
      high = low;
      low = at(b - GOLDEN * (b - a), high.value);
    } else {
      a = low.x;
      low = high;
      high = at(a + GOLDEN * (b - a), low.value);
    }
  }
  return low.value >= high.value ? low : high;
}
