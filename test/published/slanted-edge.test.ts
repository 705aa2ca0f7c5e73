/** The slanted edge against figures from outside.
 *
 * Sources: the step's pixel means are the second antiderivative of the normal distribution; the response of
 * a step that is blurred by a round Gaussian of sigma px, seen by square pixels and tilted by a, along the
 * rows is exp(-2 pi^2 sigma^2 fn^2) sinc(fn cos a) sinc(fn sin a) with fn = f / cos a (derived; the figures
 * were computed apart from this code, those of the pixels confirmed by 24 x 24 Gauss quadrature to 5e-12).
 * The method: ISO 12233:2014/2017, e-SFR, and Burns 2000, in outline (from memory).
 */
import jstat from 'jstat';
import { describe, expect, it } from 'vitest';
import { fitEdge } from '../../src/measure/edge-line.js';
import { edgeSpread } from '../../src/measure/edge-spread.js';
import { lineSpread, sfrAt, sinc } from '../../src/measure/sfr.js';
import { measureEdge } from '../../src/measure/slanted-edge.js';
import { cutStrip } from '../../src/measure/strip.js';
import { FftPlan } from '../../src/numeric/fft.js';
import { edgePicture } from '../measure/edge-pictures.js';

const PIXELS = [
  [4.528572015784738e-9, 5.639120626048695e-5, 0.020804440752293846, 0.382665017321825, 0.9221511159356397],
  [
    1.1971903588202947e-8, 0.00010832961196416296, 0.029924130356457492, 0.44070060305390235,
    0.9421471987640927,
  ],
  [
    3.0757900519970945e-8, 0.00020258031531259627, 0.04207248872286659, 0.49999999999999983,
    0.9579275112771353,
  ],
  [7.680378588699276e-8, 0.0003688604800972862, 0.057852801235904715, 0.5592993969460988, 0.9700758696435395],
  [1.864167951147596e-7, 0.0006541103783107892, 0.0778488840643609, 0.6173349826781745, 0.979195559247707],
];

const RESPONSES: [sigmaPx: number, expected: number[]][] = [
  [0.3, [0.966058, 0.870407, 0.804384, 0.729835, 0.567192, 0.40565]],
  [0.5, [0.935798, 0.766368, 0.659296, 0.548067, 0.340872, 0.183072]],
  [0.8, [0.86595, 0.561928, 0.405998, 0.272666, 0.098529, 0.026326]],
];
const ALONG_ROWS = [0.1, 0.2, 0.25, 0.3, 0.4, 0.5];

describe('the slanted edge against published figures', () => {
  it('is drawn in the tests with the right pixel means', () => {
    const { samples } = edgePicture({
      width: 7,
      height: 5,
      normalDeg: 5,
      at: [3, 2],
      sigmaPx: 0.5,
      dark: 0,
      bright: 1,
    });
    // 1e-6 is asked for; float32 holds 6e-8
    for (const [row, values] of PIXELS.entries())
      for (const [column, value] of values.entries())
        expect(Math.abs(samples[7 * row + column] - value)).toBeLessThan(1e-7);
  });

  it.each(RESPONSES)('has the response of a Gaussian of %s px along the rows', (sigmaPx, expected) => {
    const plane = edgePicture({ normalDeg: 5, sigmaPx });
    const { sfr, angleDeg } = measureEdge(plane, {
      x: 39.5,
      y: 39.5,
      normalDeg: 5,
      lengthPx: 70,
      halfWidthPx: 30,
    });
    const cos = Math.cos((angleDeg * Math.PI) / 180);
    // a quarter-pixel bin makes up to 0.0103 here, and 0.015 are allowed for it; the spline has no bin:
    // measured 0.0004
    for (const [i, f] of ALONG_ROWS.entries())
      expect(Math.abs(sfr(f / cos) - expected[i])).toBeLessThan(0.002);
  });

  it('corrects for the derivative by the sinc that the central difference has', () => {
    const differences = [0.995892735, 0.974495358, 0.900316316]; // at 0.1, 0.25, 0.5 cycles a pixel; elementary
    for (const [i, f] of [0.1, 0.25, 0.5].entries()) expect(sinc(f / 2)).toBeCloseTo(differences[i], 9);
  });

  // Source: fft.js 4.0, a general-purpose FFT
  it('transforms the line as a general-purpose FFT does', () => {
    const plane = edgePicture({ normalDeg: 7, sigmaPx: 1 });
    const guess = { x: 39.5, y: 39.5, normalDeg: 7, lengthPx: 70, halfWidthPx: 30 };
    const strip = cutStrip(plane, guess, { x: 0, y: 0, width: 80, height: 80 });
    const line = lineSpread(edgeSpread(strip, fitEdge(strip, 10), 30, strip.halfRows));
    const size = 256;
    const input = new Float64Array(2 * size);
    for (const [k, value] of line.values.entries()) input[2 * k] = value;
    const out = new Float64Array(2 * size);
    new FftPlan(size).transform(out, input, 'minus');
    for (const bin of [1, 5, 17, 31]) {
      const f = (4 * bin) / size; // four samples a pixel
      const theirs = Math.hypot(out[2 * bin], out[2 * bin + 1]) / out[0] / sinc(f / 2);
      expect(sfrAt(line, f)).toBeCloseTo(theirs, 10);
    }
  });

  // Source: jstat 1.9, jStat.models.ols, ordinary least squares
  it('fits the edge as a general-purpose statistics library does', () => {
    const plane = edgePicture({ normalDeg: 8, sigmaPx: 0.7 });
    const guess = { x: 39.5, y: 39.5, normalDeg: 8, lengthPx: 60, halfWidthPx: 20 };
    const strip = cutStrip(plane, guess, { x: 0, y: 0, width: 80, height: 80 });
    const { c, v0, halfRows } = fitEdge(strip, 12);
    // centroids of the rows' derivatives, once more and without haste
    const rows: number[][] = [];
    const centroids: number[] = [];
    for (let y = Math.ceil(v0 - halfRows); y <= v0 + halfRows; y++) {
      const middle = strip.u0 + strip.slope * (y - v0);
      let [sum, moment] = [0, 0];
      for (let x = Math.ceil(middle - 12); x <= middle + 12; x++) {
        const slope = (plane.samples[80 * y + x + 1] - plane.samples[80 * y + x - 1]) / 2;
        const weight = slope * (0.54 + 0.46 * Math.cos((Math.PI * (x - middle)) / 12));
        sum += weight;
        moment += weight * x;
      }
      const t = (y - v0) / halfRows;
      rows.push([1, t, t * t]);
      centroids.push(moment / sum);
    }
    const theirs = jstat.models.ols(centroids, rows).coef;
    for (let k = 0; k < 3; k++) expect(c[k]).toBeCloseTo(theirs[k], 9);
  });
});
