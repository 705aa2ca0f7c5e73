/** Where the peaks of a PSF lie, roughly: a map of it over all the image points that the pupil's slopes can
 * reach. */
import { FftPlan, nextPowerOfTwo } from '../numeric/fft.js';
import type { WavefrontLine } from './psf.js';
import type { LocalWavefront } from './wavefront.js';

/** The slopes of W over the pupil, in waves per pupil radius. */
export interface SlopeRange {
  /** Of dW/dm. */
  alongMin: number;
  alongMax: number;
  /** Of |dW/ds|; dW/ds is odd in s. */
  acrossMax: number;
}

/** The range of slopes, looked up on rings of the pupil. */
export function slopeRange({ w40, w31, w22, w20, w11 }: LocalWavefront): SlopeRange {
  let alongMin = w11;
  let alongMax = w11;
  let acrossMax = 0;
  for (let ring = 1; ring <= 8; ring++) {
    const rho = ring / 8;
    for (let step = 0; step <= 12; step++) {
      const m = rho * COSINES[step];
      const s = rho * COSINES[Math.abs(6 - step)];
      const common = 4 * w40 * rho * rho + 2 * w31 * m + 2 * w20;
      const along = m * (common + 2 * w22) + w31 * rho * rho + w11;
      alongMin = Math.min(alongMin, along);
      alongMax = Math.max(alongMax, along);
      acrossMax = Math.max(acrossMax, Math.abs(s * common));
    }
  }
  return { alongMin, alongMax, acrossMax };
}

const COSINES = Array.from({ length: 13 }, (_, step) => Math.cos((Math.PI * step) / 12));

/** Samples of the map per lambda N of the shortest line. A peak is about 1 lambda N wide at half height. */
const SAMPLES = 2;

/** Room around the reach of the slopes, in lambda N. */
const MARGIN = 2;

/** A peak whose estimated height is below this share of the highest estimate is not the highest: the
 * estimates are good to a few percent. */
const LEAST_SHARE = 0.85;
const MOST_PEAKS = 8;

/** Starting points for the search for the highest peak, the most promising first: [along, across] in um,
 * across >= 0.
 *
 * The PSF is even across the radius, so rows s >= 0 of the pupil and columns y >= 0 of the map are enough.
 */
export function findCoarsePeaks(
  lines: readonly WavefrontLine[],
  slopes: readonly SlopeRange[],
  fNumber: number,
): [alongUm: number, acrossUm: number][] {
  const airyUm = lines.map(({ nm }) => (nm / 1000) * fNumber);
  const shortestAiryUm = Math.min(...airyUm);
  const stepUm = shortestAiryUm / SAMPLES;
  // eps = -2 lambda N dW
  const firstUm =
    Math.min(...slopes.map((slope, i) => -2 * airyUm[i] * slope.alongMax)) - MARGIN * shortestAiryUm;
  const lastUm =
    Math.max(...slopes.map((slope, i) => -2 * airyUm[i] * slope.alongMin)) + MARGIN * shortestAiryUm;
  const acrossUm =
    Math.max(...slopes.map((slope, i) => 2 * airyUm[i] * slope.acrossMax)) + MARGIN * shortestAiryUm;
  const columns = Math.ceil((lastUm - firstUm) / stepUm) + 1;
  const rows = Math.ceil(acrossUm / stepUm) + 1;
  const map = new Float64Array(columns * rows);
  lines.forEach(({ nm, weight, wavefront }, i) => {
    addIntensity(
      map,
      columns,
      rows,
      wavefront,
      firstUm / (2 * airyUm[i]),
      stepUm / (2 * airyUm[i]),
      weight / nm ** 2,
    );
  });
  return peaksOf(map, columns, rows).map(([x, y]) => [firstUm + x * stepUm, y * stepUm]);
}

/** Add weight |a|^2 of one line to a map, columns x rows samples, column by column: a at u = u0 + j step, v =
 * l step, in waves of tilt. Only the relation of the heights matters. */
function addIntensity(
  map: Float64Array,
  columns: number,
  rows: number,
  { w40, w31, w22, w20, w11 }: LocalWavefront,
  u0: number,
  step: number,
  weight: number,
): void {
  const nu = Math.max(16, nextPowerOfTwo(columns));
  const nv = Math.max(16, nextPowerOfTwo(2 * rows));
  const stepM = 1 / (nu * step);
  const stepS = 1 / (nv * step);
  const softness = 2 / (stepM + stepS);
  const reachM = Math.min(Math.ceil(1 / stepM), nu / 2 - 1);
  const reachS = Math.min(Math.ceil(1 / stepS), nv / 2 - 1);
  const along = planOf(nu);
  const input = new Float64Array(2 * nu);
  const spectra = new Float64Array(2 * nu * (reachS + 1));
  for (let b = 0; b <= reachS; b++) {
    const s = b * stepS;
    input.fill(0);
    for (let a = -reachM; a <= reachM; a++) {
      const m = a * stepM;
      const rho2 = m * m + s * s;
      const inside = 0.5 + (1 - Math.sqrt(rho2)) * softness; // the rim is soft over about one sample
      if (inside <= 0) continue;
      const amplitude = Math.min(1, inside);
      const phase = 2 * Math.PI * (rho2 * (w40 * rho2 + w31 * m + w20) + m * (w22 * m + w11 + u0));
      const at = 2 * (a & (nu - 1));
      input[at] = amplitude * Math.cos(phase);
      input[at + 1] = amplitude * Math.sin(phase);
    }
    along.transform(spectra.subarray(2 * nu * b, 2 * nu * (b + 1)), input, 'plus');
  }
  const scale = weight * (stepM * stepS) ** 2;
  const across = planOf(nv);
  const column = new Float64Array(2 * nv);
  const output = new Float64Array(2 * nv);
  for (let j = 0; j < columns; j++) {
    for (let b = 0; b <= reachS; b++) {
      const re = spectra[2 * (nu * b + j)];
      const im = spectra[2 * (nu * b + j) + 1];
      column[2 * b] = re;
      column[2 * b + 1] = im;
      if (b === 0) continue;
      column[2 * (nv - b)] = re;
      column[2 * (nv - b) + 1] = im;
    }
    across.transform(output, column, 'plus');
    for (let l = 0; l < rows; l++)
      map[j * rows + l] += scale * (output[2 * l] * output[2 * l] + output[2 * l + 1] * output[2 * l + 1]);
  }
}

const plans = new Map<number, FftPlan>();

/** Plans are kept: a rig's field points share few sizes. */
function planOf(size: number): FftPlan {
  let plan = plans.get(size);
  if (plan === undefined) {
    plan = new FftPlan(size);
    plans.set(size, plan);
  }
  return plan;
}

/** Local maxima of the map, in samples, the highest first, refined by the parabola through the logarithms of
 * three neighbours. */
function peaksOf(map: Float64Array, columns: number, rows: number): [x: number, y: number][] {
  const at = (x: number, y: number) => (x < 0 || x >= columns || y >= rows ? 0 : map[x * rows + Math.abs(y)]);
  const peaks: { x: number; y: number; height: number }[] = [];
  for (let x = 0; x < columns; x++)
    for (let y = 0; y < rows; y++) {
      const here = at(x, y);
      const isPeak =
        here > 0 &&
        here >= at(x - 1, y) &&
        here > at(x + 1, y) &&
        here >= at(x, y - 1) &&
        (y === 0 || here > at(x, y + 1)) &&
        here >= at(x - 1, y - 1) &&
        here >= at(x - 1, y + 1) &&
        here >= at(x + 1, y - 1) &&
        here >= at(x + 1, y + 1);
      if (!isPeak) continue;
      const [dx, gainX] = vertex(at(x - 1, y), here, at(x + 1, y));
      const [dy, gainY] = vertex(at(x, y - 1), here, at(x, y + 1));
      peaks.push({ x: x + dx, y: Math.abs(y + dy), height: here * gainX * gainY });
    }
  peaks.sort((a, b) => b.height - a.height || a.x - b.x || a.y - b.y);
  return peaks
    .filter(({ height }) => height >= LEAST_SHARE * peaks[0].height)
    .slice(0, MOST_PEAKS)
    .map(({ x, y }) => [x, y]);
}

/** Offset, in steps, of the top of a Gaussian through three samples, and its height over the middle one. */
function vertex(before: number, here: number, after: number): [offset: number, gain: number] {
  const tiny = 1e-3 * here; // a zero next to the peak must not pull the top away
  const p = Math.log(Math.max(before, tiny));
  const q = Math.log(here);
  const r = Math.log(Math.max(after, tiny));
  const bend = p - 2 * q + r;
  if (bend >= 0) return [0, 1];
  const offset = Math.max(-0.5, Math.min(0.5, (0.5 * (p - r)) / bend));
  return [offset, Math.exp(0.25 * (r - p) * offset)];
}
