/** The optics the slow way, straight from their definitions on a sampled pupil: what the fast ways are held
 * against. */
import type { WavefrontLine } from '../../src/optics/psf.js';
import { type LocalWavefront, opticalPathWaves } from '../../src/optics/wavefront.js';

/** The OTF as the autocorrelation of a pupil of n x n samples: the sum over the samples of which both shifted
 * copies lie in the pupil.
 *
 * The edge of the overlap is as ragged as the samples: at n = 400 the sum is within some 3e-4 of the
 * integral.
 * @param angleDeg of the modulation from the outward radius
 */
export function autocorrelation(
  wavefront: LocalWavefront,
  nu: number,
  angleDeg: number,
  n = 400,
): [re: number, im: number] {
  const dm = nu * Math.cos((angleDeg * Math.PI) / 180);
  const ds = nu * Math.sin((angleDeg * Math.PI) / 180);
  let re = 0;
  let im = 0;
  for (let row = 0; row < n; row++) {
    const s = (2 * row + 1) / n - 1;
    for (let column = 0; column < n; column++) {
      const m = (2 * column + 1) / n - 1;
      if ((m + dm) ** 2 + (s + ds) ** 2 > 1 || (m - dm) ** 2 + (s - ds) ** 2 > 1) continue;
      const waves = opticalPathWaves(wavefront, m + dm, s + ds) - opticalPathWaves(wavefront, m - dm, s - ds);
      re += Math.cos(2 * Math.PI * waves);
      im += Math.sin(2 * Math.PI * waves);
    }
  }
  const area = (2 / n) ** 2 / Math.PI;
  return [re * area, im * area];
}

/** Heights of a band's PSF on a grid of image points over the height without aberration, by plain sums over n
 * x n pupil samples.
 * @returns heights[i][j] at along[i], across[j] in um */
export function psfHeights(
  lines: readonly WavefrontLine[],
  fNumber: number,
  along: readonly number[],
  across: readonly number[],
  n = 96,
): number[][] {
  const heights = along.map(() => across.map(() => 0));
  let total = 0;
  for (const { nm, weight, wavefront } of lines) {
    const lambdaUm = nm / 1000;
    const share = weight / lambdaUm ** 2; // of unit energy, pi / (4 lambda^2 N^2)
    total += share;
    const radPerUm = Math.PI / (lambdaUm * fNumber);
    const at = (index: number) => (2 * index + 1) / n - 1;
    // P exp(i v s) summed over s, for each m and each point across; then times exp(i u m) summed over m
    const sumRe = across.map(() => new Float64Array(n));
    const sumIm = across.map(() => new Float64Array(n));
    let count = 0;
    for (let column = 0; column < n; column++)
      for (let row = 0; row < n; row++) {
        const m = at(column);
        const s = at(row);
        if (m * m + s * s > 1) continue;
        count++;
        const phase = 2 * Math.PI * opticalPathWaves(wavefront, m, s);
        across.forEach((y, j) => {
          sumRe[j][column] += Math.cos(phase + radPerUm * y * s);
          sumIm[j][column] += Math.sin(phase + radPerUm * y * s);
        });
      }
    along.forEach((x, i) => {
      const c = Float64Array.from({ length: n }, (_, column) => Math.cos(radPerUm * x * at(column)));
      const d = Float64Array.from({ length: n }, (_, column) => Math.sin(radPerUm * x * at(column)));
      across.forEach((_, j) => {
        let re = 0;
        let im = 0;
        for (let column = 0; column < n; column++) {
          re += c[column] * sumRe[j][column] - d[column] * sumIm[j][column];
          im += d[column] * sumRe[j][column] + c[column] * sumIm[j][column];
        }
        heights[i][j] += (share * (re * re + im * im)) / (count * count);
      });
    });
  }
  return heights.map((row) => row.map((height) => height / total));
}
