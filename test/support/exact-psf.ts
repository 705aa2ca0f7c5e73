/** PSFs by direct quadrature of the diffraction integral, pixel by pixel: no FFT, no sampled rim, nothing of src but the terms of W. */
import type { WavefrontLine } from '../../src/optics/psf.js';

/** Energy that falls into boxes of a sensor, as a share of all the light of the point.
 *
 * U(X) = 1/pi integral over the unit pupil of exp(i 2 pi W + i pi x.X / (lambda N)), intensity |U|^2 pi / (4 lambda^2 N^2) of unit
 * energy, whose stationary points lie at X = -2 N lambda grad W (Goodman, Introduction to Fourier Optics, ch. 6; Born and Wolf, Principles of
 * Optics, 9.1; both from memory). The pupil is cut into chords x = sin t, |y| <= cos t, with Gauss-Legendre rules in t and along each chord: the
 * integrand has no edge inside the rule, so the quadrature converges like the phase is smooth. Each box is integrated by a Gauss-Legendre rule, too.
 *
 * @param columnsUm middles of the boxes in x, from the image point, + right
 * @param rowsUm    the same in y, + down
 * @returns energy[row][column]
 */
export function exactPixels(
  lines: readonly WavefrontLine[],
  fNumber: number,
  boxUm: number,
  columnsUm: readonly number[],
  rowsUm: readonly number[],
): number[][] {
  const energy = rowsUm.map(() => columnsUm.map(() => 0));
  for (const { nm, weight, wavefront } of lines) {
    const { w40, w31, w22, w20, w11, cos, sin } = wavefront;
    const lambdaN = (nm / 1000) * fNumber;
    const box = rule(6 + Math.ceil((0.75 * Math.PI * boxUm) / lambdaN));
    const places = (middles: readonly number[]) =>
      middles.flatMap((middle) => Array.from(box.nodes, (u) => middle + (u * boxUm) / 2));
    const xs = places(columnsUm);
    const ys = places(rowsUm);
    const farthest = Math.max(...[...xs, ...ys].map(Math.abs));
    const slope =
      4 * Math.abs(w40) + 3 * Math.abs(w31) + 2 * Math.abs(w22) + 2 * Math.abs(w20) + Math.abs(w11);
    // n nodes follow a phase of slope 2 n at best; half as many again and a dozen leave 1e-8. Across, t runs over half a turn.
    const steepest = 2 * Math.PI * slope + (Math.PI * farthest) / lambdaN;
    const across = rule(12 + Math.ceil((0.75 * Math.PI * steepest) / 2));
    const along = rule(12 + Math.ceil(0.75 * steepest));
    const re = new Float64Array(xs.length * ys.length);
    const im = new Float64Array(xs.length * ys.length);
    const chordRe = new Float64Array(ys.length);
    const chordIm = new Float64Array(ys.length);
    for (let i = 0; i < across.nodes.length; i++) {
      const t = (Math.PI / 2) * across.nodes[i];
      const x = Math.sin(t);
      const halfChord = Math.cos(t);
      chordRe.fill(0);
      chordIm.fill(0);
      for (let j = 0; j < along.nodes.length; j++) {
        const y = halfChord * along.nodes[j];
        const m = x * cos + y * sin;
        const rho2 = x * x + y * y;
        const waves = w40 * rho2 ** 2 + w31 * rho2 * m + w22 * m ** 2 + w20 * rho2 + w11 * m;
        for (let k = 0; k < ys.length; k++) {
          const phase = 2 * Math.PI * waves + (Math.PI * y * ys[k]) / lambdaN;
          chordRe[k] += along.weights[j] * Math.cos(phase);
          chordIm[k] += along.weights[j] * Math.sin(phase);
        }
      }
      const share = (across.weights[i] * halfChord * halfChord) / 2; // dx dy / pi = (pi/2 cos t dt) (cos t dv) / pi
      for (let l = 0; l < xs.length; l++) {
        const c = share * Math.cos((Math.PI * x * xs[l]) / lambdaN);
        const s = share * Math.sin((Math.PI * x * xs[l]) / lambdaN);
        for (let k = 0; k < ys.length; k++) {
          re[k * xs.length + l] += c * chordRe[k] - s * chordIm[k];
          im[k * xs.length + l] += s * chordRe[k] + c * chordIm[k];
        }
      }
    }
    const side = box.nodes.length;
    const scale = (weight * boxUm ** 2 * Math.PI) / (4 * lambdaN ** 2);
    for (let k = 0; k < ys.length; k++) {
      for (let l = 0; l < xs.length; l++) {
        const at = k * xs.length + l;
        const share = (box.weights[k % side] * box.weights[l % side]) / 4;
        energy[Math.floor(k / side)][Math.floor(l / side)] += scale * share * (re[at] ** 2 + im[at] ** 2);
      }
    }
  }
  return energy;
}

interface Rule {
  nodes: readonly number[];
  weights: readonly number[];
}

const rules = new Map<number, Rule>();

/** Gauss-Legendre rule by the Golub-Welsch idea turned round: roots of P_n by bisection between those of P_(n-1), weights from P_n'.
 * Written apart from the one in src. */
function rule(n: number): Rule {
  const kept = rules.get(n);
  if (kept !== undefined) return kept;
  const legendre = (x: number): [value: number, previous: number] => {
    let previous = 1;
    let value = x;
    for (let k = 1; k < n; k++)
      [previous, value] = [value, ((2 * k + 1) * x * value - k * previous) / (k + 1)];
    return [value, previous];
  };
  const nodes: number[] = [];
  const weights: number[] = [];
  for (let i = 1; i <= n; i++) {
    // Bruns's bounds: cos(i pi / (n + 1/2)) < x_i < cos((i - 1/2) pi / (n + 1/2)); they hold one root each
    let low = Math.cos((i * Math.PI) / (n + 0.5));
    let high = Math.cos(((i - 0.5) * Math.PI) / (n + 0.5));
    const isRising = legendre(high)[0] > 0;
    for (let step = 0; step < 60; step++) {
      const middle = (low + high) / 2;
      if (legendre(middle)[0] > 0 === isRising) high = middle;
      else low = middle;
    }
    const x = (low + high) / 2;
    const [value, previous] = legendre(x);
    const derivative = (n * (x * value - previous)) / (x * x - 1);
    nodes.push(x);
    weights.push(2 / ((1 - x * x) * derivative * derivative));
  }
  const made = { nodes, weights };
  rules.set(n, made);
  return made;
}
