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
 * @param tolerance the length of the interval to stop at
 */
export function goldenMaximum(f: (x: number) => number, from: number, to: number, tolerance: number): Peak {
  let [a, b] = [from, to];
  let low = { x: b - GOLDEN * (b - a), value: 0 };
  let high = { x: a + GOLDEN * (b - a), value: 0 };
  low.value = f(low.x);
  high.value = f(high.x);
  while (b - a > tolerance) {
    if (low.value >= high.value) {
      b = high.x;
      high = low;
      low = { x: b - GOLDEN * (b - a), value: 0 };
      low.value = f(low.x);
    } else {
      a = low.x;
      low = high;
      high = { x: a + GOLDEN * (b - a), value: 0 };
      high.value = f(high.x);
    }
  }
  return low.value >= high.value ? low : high;
}
