/** Interpolation that never overshoots its table. */

/** A curve through the points of a table: monotone between neighbours, held flat outside.
 *
 * Source: F. N. Fritsch and R. E. Carlson, "Monotone Piecewise Cubic Interpolation", SIAM J. Numer. Anal. 17 (1980) 238, with the
 * three-point slopes of F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300 (both cited from memory).
 *
 * @param table [x, y] with rising x; an empty table is 0 everywhere, a single point a constant
 */
export function monotoneCubic(table: readonly (readonly [number, number])[]): (x: number) => number {
  const count = table.length;
  if (count === 0) return () => 0;
  if (count === 1) return () => table[0][1];
  const slopes = fritschButlandSlopes(table);
  return (x) => {
    if (x <= table[0][0]) return table[0][1];
    if (x >= table[count - 1][0]) return table[count - 1][1];
    let i = 0;
    while (x > table[i + 1][0]) i++;
    const [x0, y0] = table[i];
    const [x1, y1] = table[i + 1];
    const width = x1 - x0;
    const t = (x - x0) / width;
    const s = 1 - t;
    // cubic Hermite form
    return (
      y0 * s * s * (1 + 2 * t) +
      y1 * t * t * (3 - 2 * t) +
      width * (slopes[i] * t * s * s - slopes[i + 1] * s * t * t)
    );
  };
}

function fritschButlandSlopes(table: readonly (readonly [number, number])[]): Float64Array {
  const count = table.length;
  const slopes = new Float64Array(count);
  const width = (i: number) => table[i + 1][0] - table[i][0];
  const secant = (i: number) => (table[i + 1][1] - table[i][1]) / width(i);
  for (let i = 1; i < count - 1; i++) {
    const before = secant(i - 1);
    const after = secant(i);
    if (before * after <= 0) continue; // a local extremum stays one
    const weightBefore = 2 * width(i) + width(i - 1);
    const weightAfter = width(i) + 2 * width(i - 1);
    slopes[i] = (weightBefore + weightAfter) / (weightBefore / before + weightAfter / after);
  }
  if (count === 2) {
    slopes.fill(secant(0));
    return slopes;
  }
  slopes[0] = endSlope(width(0), width(1), secant(0), secant(1));
  slopes[count - 1] = endSlope(width(count - 2), width(count - 3), secant(count - 2), secant(count - 3));
  return slopes;
}

/** One-sided three-point slope at an end, limited so that the curve stays monotone there. */
function endSlope(width: number, nextWidth: number, secant: number, nextSecant: number): number {
  const slope = ((2 * width + nextWidth) * secant - width * nextSecant) / (width + nextWidth);
  if (slope * secant <= 0) return 0;
  if (secant * nextSecant <= 0 && Math.abs(slope) > 3 * Math.abs(secant)) return 3 * secant;
  return slope;
}
