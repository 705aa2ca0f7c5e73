/** Numbers as they are written. */

/** Round to so many decimals; never -0. */
export function rounded(value: number, decimals: number): number {
  const scale = 10 ** decimals;
  return Math.round(value * scale) / scale + 0;
}
