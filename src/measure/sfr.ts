/** From the edge spread function to the spatial frequency response and the edge's width. */
import { hamming } from './edge-line.js';
import { type EdgeSpread, OVERSAMPLING } from './edge-spread.js';

/** The line spread function under its window: the derivative of the edge spread function. */
export interface LineSpread {
  /** Windowed derivative at the distances (k - middle) / OVERSAMPLING, in pixels. */
  values: Float64Array;
  middle: number;
  sum: number;
}

/** Half the width of the Hamming window over that of the edge spread function. A window that ends with the
 * function, as is usual, weighs down the skirts of a wide blur and makes it look sharper: a Gaussian of 2
 * pixels by 0.007 of the response with 30 pixels on either side, twice the width by 0.002. The noise that it
 * would have held down is held down by `quietTails`. */
const WINDOW_WIDTHS = 2;

/** Derivative by central differences, its tails quietened, times a Hamming window centred on its peak.
 * Source: ISO 12233:2017, e-SFR, in outline (from memory). */
export function lineSpread(spread: EdgeSpread): LineSpread {
  const { values: edge, middle } = spread;
  const raw = new Float64Array(edge.length);
  for (let k = 1; k < edge.length - 1; k++) raw[k] = (edge[k + 1] - edge[k - 1]) / 2;
  const peak = peakOf(raw);
  const values = quietTails(raw, peak, coreOf(spread));
  let sum = 0;
  for (let k = 0; k < values.length; k++) {
    values[k] *= hamming((k - peak) / (WINDOW_WIDTHS * middle)); // the line ends before the window does
    sum += values[k];
  }
  return { values, middle, sum };
}

/** The part of the line that is left as it is: on either side one and a half times the edge's width, at least
 * so many pixels. */
const CORE_WIDTHS = 1.5;
const LEAST_CORE_PX = 4;

function coreOf(spread: EdgeSpread): number {
  return (
    OVERSAMPLING * Math.max(LEAST_CORE_PX, CORE_WIDTHS * (edgeWidthPx(spread) ?? Number.POSITIVE_INFINITY))
  );
}

/** Far from the edge the light that a blur leaves changes slowly with the distance, and the noise does not.
 * So each sample outside of the core is spread evenly over its surroundings, half of the way to the core on
 * either side, as far as the line goes. No light is lost. */
function quietTails(line: Float64Array, peak: number, core: number): Float64Array {
  const out = new Float64Array(line.length);
  for (let k = 0; k < line.length; k++) {
    const far = Math.max(0, Math.abs(k - peak) - core);
    const reach = Math.min(Math.floor(far / 2), k, line.length - 1 - k);
    for (let j = -reach; j <= reach; j++) out[k + j] += line[k] / (2 * reach + 1);
  }
  return out;
}

/** The middle of the pixel's width that holds the most of the line: less at the mercy of noise than the
 * highest sample. */
function peakOf(line: Float64Array): number {
  const half = OVERSAMPLING >> 1;
  let best = line.length >> 1;
  let most = Number.NEGATIVE_INFINITY;
  for (let k = half; k < line.length - half; k++) {
    let sum = 0;
    for (let j = -half; j <= half; j++) sum += line[k + j];
    if (sum > most) [best, most] = [k, sum];
  }
  return best;
}

/** The response at a frequency in cycles a pixel along the edge's normal: the modulus of the line spread
 * function's transform over its value at 0, freed from the central difference, sinc(f/2), sinc(x) = sin(pi
 * x)/(pi x). */
export function sfrAt({ values, middle, sum }: LineSpread, cyclesPerPixel: number): number {
  const turn = (2 * Math.PI * cyclesPerPixel) / OVERSAMPLING;
  let re = 0;
  let im = 0;
  for (let k = 0; k < values.length; k++) {
    re += values[k] * Math.cos(turn * (k - middle));
    im += values[k] * Math.sin(turn * (k - middle));
  }
  return Math.hypot(re, im) / Math.abs(sum) / sinc((2 * cyclesPerPixel) / OVERSAMPLING);
}

/** Frequencies past this one say nothing: the central difference comes near its first zero, at 2. */
const LARGEST_FREQUENCY = 1;

/** The lowest frequency, up to 1 cycle a pixel, at which a response falls to a half; null where it does not.
 */
export function halfFrequency(response: (cyclesPerPixel: number) => number): number | null {
  const step = 0.005;
  let before = 1;
  for (let at = 1; at * step <= LARGEST_FREQUENCY + 1e-9; at++) {
    const value = response(at * step);
    if (value <= 0.5) return (at - 1 + (before - 0.5) / (before - value)) * step;
    before = value;
  }
  return null;
}

/** Distance between the places where the edge passes 10 % and 90 % of its step, each the first one on the way
 * out from the middle, in pixels. Null where it does not pass them. */
export function edgeWidthPx({ values, middle, dark, bright }: EdgeSpread): number | null {
  const crossing = (share: number, way: 1 | -1): number | null => {
    const target = dark + share * (bright - dark);
    for (let k = middle; k > 0 && k < values.length - 1; k += way) {
      const here = values[k];
      const next = values[k + way];
      if ((here - target) * (next - target) <= 0 && here !== next)
        return k + (way * (target - here)) / (next - here);
    }
    return null;
  };
  const up = crossing(0.9, 1);
  const down = crossing(0.1, -1);
  return up === null || down === null ? null : (up - down) / OVERSAMPLING;
}

export function sinc(x: number): number {
  return x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
}
