/** Resampling of planes to another size with a windowed sinc, exact in position. */

/** What every sample of an output line takes from the input line: sample k is the sum over j of
 * `weights[k * taps + j] * input[clamp(first[k] + j)]`. The weights of a sample sum to 1 and have their
 * centre of gravity at the place of the sample: a ramp stays that ramp. */
export interface ResampleWeights {
  taps: number;
  first: Int32Array;
  weights: Float64Array;
}

/** Half-width of the kernel in lobes. */
const LOBES = 3;

/** Lanczos kernel of three lobes, sinc(x) sinc(x / 3) for |x| < 3.
 * Source: C. Lanczos's sigma factors as used in C. E. Duchon, "Lanczos filtering in one and two dimensions",
 * J. Appl. Meteor. 18 (1979) 1016 (from memory). */
export function lanczos3(x: number): number {
  const t = Math.abs(x);
  if (t < 1e-9) return 1;
  // sin(pi t) of a whole t is not exactly 0 in floating point; the kernel is
  if (t >= LOBES || Number.isInteger(t)) return 0;
  const a = Math.PI * t;
  return (LOBES * Math.sin(a) * Math.sin(a / LOBES)) / (a * a);
}

/** Weights that take a line of `inputLength` samples to one of `outputLength` samples at a magnification of
 * `scale`: output sample k lies at (k - middle) / scale + (inputLength - 1) / 2 of the input.
 *
 * Where the line shrinks, the kernel widens by 1 / scale, so that what the coarser grid cannot carry is
 * filtered out. The input is extended past its ends by its end samples.
 *
 * @param middle  where the input's middle comes to lie, in samples of the output; default: on its middle
 */
export function resampleWeights(
  inputLength: number,
  outputLength: number,
  scale: number,
  middle = (outputLength - 1) / 2,
): ResampleWeights {
  const widening = Math.max(1, 1 / scale);
  const support = LOBES * widening;
  const position = (k: number) => (k - middle) / scale + (inputLength - 1) / 2;
  if (scale === 1 && Number.isInteger(position(0))) {
    const first = Int32Array.from({ length: outputLength }, (_, k) => position(k));
    return { taps: 1, first, weights: new Float64Array(outputLength).fill(1) };
  }
  const taps = Math.ceil(2 * support);
  const first = new Int32Array(outputLength);
  const weights = new Float64Array(outputLength * taps);
  for (let k = 0; k < outputLength; k++) {
    const place = position(k);
    first[k] = Math.floor(place - support) + 1;
    const own = weights.subarray(k * taps, (k + 1) * taps);
    for (let j = 0; j < taps; j++) own[j] = lanczos3((first[k] + j - place) / widening);
    centreWeights(own, first[k] - place, support);
  }
  return { taps, first, weights };
}

/** Make weights sum to 1 and balance about 0, in place.
 *
 * A sampled windowed sinc does neither: divided by its sum alone, it takes samples from up to 0.02 beside
 * their place. What is missing is added as a straight line under a window g: w <- w / sum(w) + g (b + c t),
 * with b and c from the two conditions.
 *
 * @param start  place t of the first weight against the sample
 */
function centreWeights(weights: Float64Array, start: number, support: number): void {
  let sum = 0;
  let moment = 0;
  let [g0, g1, g2] = [0, 0, 0];
  for (let j = 0; j < weights.length; j++) {
    const t = start + j;
    const g = window(t / support);
    sum += weights[j];
    moment += weights[j] * t;
    g0 += g;
    g1 += g * t;
    g2 += g * t * t;
  }
  // g0 b + g1 c = 0 and g1 b + g2 c = -moment / sum
  const determinant = g0 * g2 - g1 * g1;
  const b = ((moment / sum) * g1) / determinant;
  const c = ((-moment / sum) * g0) / determinant;
  for (let j = 0; j < weights.length; j++) {
    const t = start + j;
    weights[j] = weights[j] / sum + window(t / support) * (b + c * t);
  }
}

/** 1 at 0, falling to 0 at 1. */
function window(x: number): number {
  return Math.max(0, 1 - Math.abs(x)) ** 2;
}

/** Resample a plane by one set of weights along its rows and one down its columns.
 *
 * Columns first, a row at a time: they cost less a product than rows, and there are more of them where a
 * picture shrinks. The result is clipped to the range of the input: the kernel rings, and what it rings
 * beyond the brightest and the darkest sample is no part of the picture.
 *
 * @param plane  inputHeight x inputWidth samples, row-major; not changed
 * @param out    outputHeight x outputWidth samples; not the same memory as `plane`
 */
export function resamplePlane(
  plane: Float32Array,
  inputWidth: number,
  inputHeight: number,
  alongRows: ResampleWeights,
  downColumns: ResampleWeights,
  out: Float32Array,
): void {
  const { lowest, highest } = range(plane);
  const { taps, first, weights } = downColumns;
  const width = alongRows.first.length;
  const line = new PaddedLine(inputWidth, alongRows);
  const starts = new Int32Array(taps);
  for (let y = 0; y < first.length; y++) {
    for (let j = 0; j < taps; j++) {
      starts[j] = Math.min(Math.max(first[y] + j, 0), inputHeight - 1) * inputWidth;
    }
    weighRows(line.samples, line.offset, inputWidth, plane, starts, weights, y * taps);
    line.pad();
    weighLine(out, y * width, line, alongRows, lowest, highest);
  }
}

/** A line with its end samples repeated on both sides as far as the weights reach, so that the inner loop
 * needs no bounds. */
class PaddedLine {
  readonly samples: Float64Array;
  /** Where sample 0 of the line lies in `samples`. */
  readonly offset: number;
  readonly #end: number;

  constructor(length: number, { first, taps }: ResampleWeights) {
    const reach = first[first.length - 1] + taps;
    this.offset = Math.max(0, -first[0]);
    this.#end = this.offset + length;
    this.samples = new Float64Array(this.offset + Math.max(length, reach));
  }

  pad(): void {
    this.samples.fill(this.samples[this.offset], 0, this.offset);
    this.samples.fill(this.samples[this.#end - 1], this.#end);
  }
}

/** out[offset + x] = sum over j of weights[weightsStart + j] * plane[starts[j] + x].
 * Four rows a pass, so that the sum is loaded and stored a quarter as often as row by row. */
function weighRows(
  out: Float64Array,
  offset: number,
  length: number,
  plane: Float32Array,
  starts: Int32Array,
  weights: Float64Array,
  weightsStart: number,
): void {
  out.fill(0);
  let j = 0;
  for (; j + 3 < starts.length; j += 4) {
    const [a, b, c, d] = [starts[j], starts[j + 1], starts[j + 2], starts[j + 3]];
    const w = weightsStart + j;
    const [wa, wb, wc, wd] = [weights[w], weights[w + 1], weights[w + 2], weights[w + 3]];
    for (let x = 0; x < length; x++) {
      out[offset + x] += wa * plane[a + x] + wb * plane[b + x] + wc * plane[c + x] + wd * plane[d + x];
    }
  }
  for (; j < starts.length; j++) {
    const start = starts[j];
    const weight = weights[weightsStart + j];
    for (let x = 0; x < length; x++) out[offset + x] += weight * plane[start + x];
  }
}

/** Two sums side by side, so that one need not wait for the other. */
function weighLine(
  out: Float32Array,
  start: number,
  { samples, offset }: PaddedLine,
  { taps, first, weights }: ResampleWeights,
  lowest: number,
  highest: number,
): void {
  for (let x = 0, w = 0; x < first.length; x++) {
    let even = 0;
    let odd = 0;
    let i = offset + first[x];
    for (const last = w + taps - 1; w < last; w += 2, i += 2) {
      even += weights[w] * samples[i];
      odd += weights[w + 1] * samples[i + 1];
    }
    if (taps % 2 === 1) even += weights[w++] * samples[i];
    out[start + x] = Math.min(Math.max(even + odd, lowest), highest);
  }
}

function range(plane: Float32Array): { lowest: number; highest: number } {
  let lowest = Number.POSITIVE_INFINITY;
  let highest = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < plane.length; i++) {
    const value = plane[i];
    if (value < lowest) lowest = value;
    if (value > highest) highest = value;
  }
  return { lowest, highest };
}
