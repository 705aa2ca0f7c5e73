/** The light-sensitive box of a pixel as a filter on the fine samples of a PSF. */

/** Fine samples on each side of the box over which the band-limited interpolation between samples reaches. */
const REACH = 8;

/** Filter taps that integrate a band-limited intensity over a box.
 *
 * The samples stand at the Nyquist rate of the intensity, where adding up the samples under the box would be wrong by up to pi/2 at
 * the cut-off. So the taps are the box integral of the interpolation kernel itself, a sinc under a Kaiser window:
 *
 *     tap(t) = (1/b) integral from t - b/2 to t + b/2 of sinc(u) window(u / reach) du
 *
 * with t the distance of a sample from the middle of the box. Their transform is sinc(b f), the transform of the box, up to a narrow
 * band below the cut-off, where the OTF itself dies away.
 */
export interface PixelBox {
  /** taps[i] belongs to the sample at distance first + i from the middle of the box. */
  taps: Float64Array;
  /** Distance of the first sample from the middle of the box: a whole number or a whole number and a half. */
  first: number;
}

/** @param widthSamples box width b in fine samples, above 0
 * @param halfSampleOff true where the middle of the box lies half-way between two samples */
export function pixelBox(widthSamples: number, halfSampleOff: boolean): PixelBox {
  const offset = halfSampleOff ? 0.5 : 0;
  const reach = widthSamples / 2 + REACH;
  const first = Math.ceil(-reach - offset) + offset;
  const last = Math.floor(reach - offset) + offset;
  const taps = new Float64Array(Math.round(last - first) + 1);
  let sum = 0;
  for (let i = 0; i < taps.length; i++) {
    const t = first + i;
    taps[i] = integrate(interpolation, t - widthSamples / 2, t + widthSamples / 2) / widthSamples;
    sum += taps[i];
  }
  for (let i = 0; i < taps.length; i++) taps[i] /= sum; // a constant stays a constant
  return { taps, first };
}

function interpolation(u: number): number {
  if (Math.abs(u) >= REACH) return 0;
  const sinc = u === 0 ? 1 : Math.sin(Math.PI * u) / (Math.PI * u);
  return sinc * kaiser(u / REACH);
}

/** Kaiser window with beta = 6: side lobes below 1e-3 of the main lobe (J. F. Kaiser, 1974; cited from memory). */
function kaiser(x: number): number {
  const beta = 6;
  return besselI0(beta * Math.sqrt(1 - x * x)) / besselI0(beta);
}

function besselI0(x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > 1e-17 * sum; k++) {
    term *= (x / (2 * k)) ** 2;
    sum += term;
  }
  return sum;
}

/** Simpson's rule; the integrand bends no faster than a sinc, so 32 steps a sample leave less than 1e-9. */
function integrate(f: (u: number) => number, from: number, to: number): number {
  const steps = 2 * Math.ceil(16 * (to - from) + 1);
  const width = (to - from) / steps;
  let sum = f(from) + f(to);
  for (let i = 1; i < steps; i++) sum += (i % 2 === 1 ? 4 : 2) * f(from + i * width);
  return (sum * width) / 3;
}
