/** Pictures of a slanted edge whose every pixel is known in closed form. */
import jstat from 'jstat';
import type { Plane } from '../../src/measure/plane.js';

export interface EdgePicture {
  width?: number;
  height?: number;
  /** Of the normal from dark to bright, from +x toward +y. */
  normalDeg: number;
  /** A point of the edge. Default: a little off the middle. */
  at?: [x: number, y: number];
  /** Round Gaussian blur, in pixels; 0: none. */
  sigmaPx?: number;
  dark?: number;
  bright?: number;
}

/** Exact pixel means, square pixels without gaps. */
export function edgePicture(options: EdgePicture): Plane {
  const { width = 80, height = 80, normalDeg, sigmaPx = 0, dark = 0.2, bright = 0.8 } = options;
  const [x0, y0] = options.at ?? [(width - 1) / 2 + 0.3, (height - 1) / 2 - 0.2];
  const [nx, ny] = [Math.cos((normalDeg * Math.PI) / 180), Math.sin((normalDeg * Math.PI) / 180)];
  const samples = Float32Array.from({ length: width * height }, (_, i) => {
    const d = ((i % width) - x0) * nx + (Math.floor(i / width) - y0) * ny;
    return dark + (bright - dark) * stepMean(d, Math.abs(nx), Math.abs(ny), sigmaPx);
  });
  return { width, height, samples };
}

/** Mean over a unit square of a unit step that is blurred by a Gaussian, the square's middle lying d behind
 * the step, along a normal (a, b): the second antiderivative of the step's profile at its four corners.
 * Derived. */
export function stepMean(d: number, a: number, b: number, sigmaPx: number): number {
  const far = a / 2 + b / 2 + 9 * sigmaPx;
  if (d >= far) return 1;
  if (d <= -far) return 0;
  if (Math.min(a, b) < 1e-9) return first(d + 0.5, sigmaPx) - first(d - 0.5, sigmaPx); // parallel to the pixels
  const corner = (t: number) => second(t, sigmaPx);
  return (
    (corner(d + a / 2 + b / 2) -
      corner(d + a / 2 - b / 2) -
      corner(d - a / 2 + b / 2) +
      corner(d - a / 2 - b / 2)) /
    (a * b)
  );
}

/** First antiderivative of the blurred step: s (t Phi(t) + phi(t)), t = d / s. */
function first(d: number, s: number): number {
  if (s === 0) return Math.max(0, d);
  const t = d / s;
  return s * (t * jstat.normal.cdf(t, 0, 1) + jstat.normal.pdf(t, 0, 1));
}

/** Second antiderivative: s^2 ((t^2 + 1) Phi(t) + t phi(t)) / 2. */
function second(d: number, s: number): number {
  if (s === 0) return Math.max(0, d) ** 2 / 2;
  const t = d / s;
  return (s * s * ((t * t + 1) * jstat.normal.cdf(t, 0, 1) + t * jstat.normal.pdf(t, 0, 1))) / 2;
}

/** The picture with Gaussian noise, the same for the same seed. */
export function withNoise(plane: Plane, sigma: number, seed: number): Plane {
  let state = seed;
  // a linear congruential generator modulo 2^32; constants of Numerical Recipes (from memory)
  const uniform = () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return (state + 0.5) / 2 ** 32;
  };
  const samples = plane.samples.map(
    (value) => value + sigma * Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform()),
  );
  return { ...plane, samples };
}
