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

/** Derivative by central differences, times a Hamming window as wide as the function, centred on its peak.
 * Source: ISO 12233:2017, e-SFR, in outline (from memory). */
export function lineSpread({ values: edge, middle }: EdgeSpread): LineSpread {
  const values = new Float64Array(edge.length);
  for (let k = 1; k < edge.length - 1; k++) values[k] = (edge[k + 1] - edge[k - 1]) / 2;
  const peak = peakOf(values);
  let sum = 0;
  for (let k = 0; k < values.length; k++) {
    const t = (k - peak) / middle;
    values[k] *= Math.abs(t) <= 1 ? hamming(t) : 0;
    sum += values[k];
  }
  return { values, middle, sum };
}

/** The middle of the pixel's width that holds the most of the line: less at the mercy of noise than the highest sample. */
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

/** The response at a frequency in cycles a pixel along the edge's normal: the modulus of the line spread function's transform over its value
 * at 0, freed from the central difference, sinc(f/2), and from the quarter-pixel bin, sinc(f/4), sinc(x) = sin(pi x)/(pi x). */
export function sfrAt({ values, middle, sum }: LineSpread, cyclesPerPixel: number): number {
  const turn = (2 * Math.PI * cyclesPerPixel) / OVERSAMPLING;
  let re = 0;
  let im = 0;
  for (let k = 0; k < values.length; k++) {
    re += values[k] * Math.cos(turn * (k - middle));
    im += values[k] * Math.sin(turn * (k - middle));
  }
  const filters = sinc((2 * cyclesPerPixel) / OVERSAMPLING) * sinc(cyclesPerPixel / OVERSAMPLING);
  return Math.hypot(re, im) / Math.abs(sum) / filters;
}

/** Frequencies past this one say nothing: the filters of the method near their first zero. */
const LARGEST_FREQUENCY = 1;

/** The lowest frequency, up to 1 cycle a pixel, at which a response falls to a half; null where it does not. */
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

/** Distance between the places where the edge passes 10 % and 90 % of its step, each the first one on the way out from the middle, in
 * pixels. Null where it does not pass them. */
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
