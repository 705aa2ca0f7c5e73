/** The radial model that a calibration takes out of a picture. */
import { gaussLegendre } from '../numeric/gauss-legendre.js';
import { solveLinear } from '../numeric/solve-linear.js';
import { pixelPitchMm, type Rig } from '../optics/rig.js';
import { landingMm } from './landing.js';

/** Brings the radius at which a point lies in the picture back to where it should lie, both in mm from the axis. */
export type RadialModel = (landedMm: number) => number;

/** Nodes along each side of the frame: polynomials of degree 15 in x and y, past any model, are integrated well. */
const NODES = 16;

/** The best radial models of a rig, by order.
 *
 * A model of order n is the polynomial of odd powers of the radius in the picture, a1 r' + a3 r'^3 + ... + an r'^n, whose square error
 * against the ideal radius, averaged over the area of the frame and over the bands, is least. One model serves all bands, as a
 * calibration with a chart gives one, so lateral colour is left over. Its middle is the optical axis.
 */
export class RadialModels {
  readonly #rig: Rig;
  readonly #byOrder = new Map<number, RadialModel>();

  constructor(rig: Rig) {
    this.#rig = rig;
  }

  /** @param order odd, 1 or more */
  ofOrder(order: number): RadialModel {
    let model = this.#byOrder.get(order);
    if (model === undefined) {
      model = fitModel(this.#rig, order);
      this.#byOrder.set(order, model);
    }
    return model;
  }
}

function fitModel(rig: Rig, order: number): RadialModel {
  const terms = (order + 1) / 2;
  const { largestMm, radiiMm, weights } = frameRadii(rig);
  const matrix = Array.from({ length: terms }, () => new Float64Array(terms));
  const right = new Float64Array(terms);
  for (const band of rig.camera.bands) {
    const landing = landingMm(rig, band);
    for (let i = 0; i < radiiMm.length; i++) {
      const t = landing(radiiMm[i]) / largestMm; // about -1..1, for the sake of the digits
      for (let row = 0; row < terms; row++) {
        const basis = weights[i] * t ** (2 * row + 1);
        for (let column = 0; column < terms; column++) matrix[row][column] += basis * t ** (2 * column + 1);
        right[row] += (basis * radiiMm[i]) / largestMm;
      }
    }
  }
  const a = solveLinear(matrix, right);
  return (landedMm) => {
    const t = landedMm / largestMm;
    let sum = 0;
    for (let term = terms - 1; term >= 0; term--) sum = sum * t * t + a[term];
    return largestMm * t * sum;
  };
}

/** Radii from the axis over the frame, with the share of its area that each stands for. */
function frameRadii(rig: Rig): { largestMm: number; radiiMm: number[]; weights: number[] } {
  const pitchMm = pixelPitchMm(rig.camera);
  const [width, height] = rig.camera.pixels;
  const [axisX, axisY] = rig.mount.axisPx;
  const { nodes, weights: nodeWeights } = gaussLegendre(NODES);
  const radiiMm: number[] = [];
  const weights: number[] = [];
  for (let i = 0; i < NODES; i++) {
    for (let j = 0; j < NODES; j++) {
      const x = 0.5 * (1 + nodes[i]) * width - 0.5 - axisX; // the frame ends half a pixel outside of its outermost pixels' middles
      const y = 0.5 * (1 + nodes[j]) * height - 0.5 - axisY;
      radiiMm.push(pitchMm * Math.hypot(x, y));
      weights.push(nodeWeights[i] * nodeWeights[j]);
    }
  }
  return { largestMm: Math.max(...radiiMm), radiiMm, weights };
}
