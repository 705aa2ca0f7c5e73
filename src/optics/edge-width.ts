/** How wide the image of a sharp edge is: the 10-90 % rise of its profile. */
import { bracketedRoot } from '../numeric/bracketed-root.js';
import { type Accuracy, gaussLegendre } from '../numeric/gauss-legendre.js';
import { bandOtf, type Direction, pixelMtf } from './otf.js';
import type { WavefrontLine } from './psf.js';
import { type Camera, pixelPitchMm } from './rig.js';
import { largestSlope } from './sampling.js';

/** The 10-90 % rise of an edge across one direction, lens and pixel together, in um.
 *
 * The profile of the edge is the running sum of the line spread function, whose transform is the OTF H:
 *
 *     E(x) = 1/2 + integral over f > 0 of [Re H sin(2 pi f x) + Im H cos(2 pi f x)] / (pi f) df
 *
 * It never falls, since neither the PSF nor the pixel is negative anywhere. With the lens's OTF goes the sinc of the pixel along its
 * rows, as in the figures of contrast by zone. Right to about 0.2 % of the width; `rough` to about 1 %.
 *
 * @param direction across the edge, as in `otf`
 * Source: J. W. Goodman, Introduction to Fourier Optics, 6.3 and 7.1, for spread functions and their transforms (cited from memory)
 */
export function edgeWidthUm(
  lines: readonly WavefrontLine[],
  fNumber: number,
  camera: Camera,
  direction: Direction,
  accuracy: Accuracy = 'full',
): number {
  const reachMm = spreadReachMm(lines, fNumber, camera);
  const spectrum = sampleSpectrum(lines, fNumber, camera, direction, reachMm, accuracy);
  const from = crossing(spectrum, 0.1, reachMm);
  const to = crossing(spectrum, 0.9, reachMm);
  return 1000 * (to - from);
}

/** Samples of H / (pi f), each times its weight in the sum over f. */
interface EdgeSpectrum {
  count: number;
  /** 2 pi f, in radians a mm. */
  omega: Float64Array;
  re: Float64Array;
  im: Float64Array;
}

/** Nodes of a panel, and the turn of phase that it may hold: an 8-point rule follows 10 radians to 1e-6, 14 to 1e-3. */
const PANEL_NODES = 8;
const PANEL_RADIANS = { full: 10, rough: 14 } as const;

/** What the frequencies left out may change of E. */
const TRUNCATION = { full: 3e-4, rough: 2e-3 } as const;

/** Half of the width in which next to all of the light lies: the rays' reach, that of diffraction, and the pixel's. */
function spreadReachMm(lines: readonly WavefrontLine[], fNumber: number, camera: Camera): number {
  let reachMm = 0;
  for (const { nm, wavefront } of lines) {
    const airyMm = nm * 1e-6 * fNumber;
    reachMm = Math.max(reachMm, airyMm * (2 * largestSlope(wavefront) + 1.5));
  }
  return reachMm + 0.5 * pixelPitchMm(camera);
}

function sampleSpectrum(
  lines: readonly WavefrontLine[],
  fNumber: number,
  camera: Camera,
  direction: Direction,
  reachMm: number,
  accuracy: Accuracy,
): EdgeSpectrum {
  const cutOff = Math.max(...lines.map(({ nm }) => 1 / (nm * 1e-6 * fNumber)));
  const panels = Math.ceil((4 * Math.PI * reachMm * cutOff) / PANEL_RADIANS[accuracy]);
  const width = cutOff / panels;
  const { nodes, weights } = gaussLegendre(PANEL_NODES);
  const omega = new Float64Array(panels * PANEL_NODES);
  const re = new Float64Array(panels * PANEL_NODES);
  const im = new Float64Array(panels * PANEL_NODES);
  const pitchMm = pixelPitchMm(camera);
  const sum = otfSum;
  let count = 0;
  let faint = 0;
  for (let panel = 0; panel < panels && faint < 2; panel++) {
    let strongest = 0;
    for (let i = 0; i < PANEL_NODES; i++) {
      const lpPerMm = (panel + 0.5 * (1 + nodes[i])) * width;
      bandOtf(lines, fNumber, lpPerMm, direction, sum, accuracy);
      const pixel = pixelMtf(camera, lpPerMm);
      const scale = (0.5 * width * weights[i] * signedPixel(pixel, camera, lpPerMm)) / (Math.PI * lpPerMm);
      omega[count] = 2 * Math.PI * lpPerMm;
      re[count] = scale * sum[0];
      im[count] = scale * sum[1];
      count++;
      strongest = Math.max(strongest, pixel * Math.hypot(sum[0], sum[1]));
    }
    // what is left oscillates at least once in the width of the edge, a pixel or more
    const left = strongest / (2 * Math.PI * Math.PI * (panel + 1) * width * pitchMm);
    faint = left < TRUNCATION[accuracy] ? faint + 1 : 0;
  }
  return { count, omega, re, im };
}

const otfSum = new Float64Array(2);

/** The pixel's transform changes its sign at every whole number of cycles a box. */
function signedPixel(modulus: number, camera: Camera, lpPerMm: number): number {
  const cycles = Math.floor(camera.fillFactor * pixelPitchMm(camera) * lpPerMm);
  return cycles % 2 === 0 ? modulus : -modulus;
}

function edgeProfile({ count, omega, re, im }: EdgeSpectrum, xMm: number): number {
  let sum = 0.5;
  for (let i = 0; i < count; i++) {
    const phase = omega[i] * xMm;
    sum += re[i] * Math.sin(phase) + im[i] * Math.cos(phase);
  }
  return sum;
}

/** Where the profile, which only rises, reaches a level, in mm. */
function crossing(spectrum: EdgeSpectrum, level: number, reachMm: number): number {
  const rise = (xMm: number) => edgeProfile(spectrum, xMm) - level;
  let near = 0;
  let atNear = rise(near);
  let stride = (atNear > 0 ? -0.25 : 0.25) * reachMm;
  for (;;) {
    const far = near + stride;
    const atFar = rise(far);
    if (atFar > 0 !== atNear > 0) {
      const offset = 8 * reachMm; // away from 0, where a relative tolerance would mean nothing
      const moved = (x: number) => rise(x - offset);
      return bracketedRoot(moved, near + offset, far + offset, atNear, atFar, 1e-6) - offset;
    }
    near = far;
    atNear = atFar;
    stride *= 1.5;
  }
}
