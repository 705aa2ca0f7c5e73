/** Defocus: the OTF, the intensity on the axis, the depth of focus. */
import { describe, expect, it } from 'vitest';
import { otf } from '../../src/optics/otf.js';
import { strehlAtReference } from '../../src/optics/strehl.js';
import { defocusWaves, wavefrontAt } from '../../src/optics/wavefront.js';
import { line, sampleRig, wavefront } from '../optics/samples.js';

const S = [0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9];

describe('OTF of a defocused lens', () => {
  // Source: the Bessel series of H. H. Hopkins, Proc. R. Soc. A 231 (1955) 91 (cited from memory), re-derived
  // and summed, and confirmed by direct quadrature to 3e-15
  it.each([
    [
      0.25,
      [
        0.9260395163816219, 0.8388602728828188, 0.6585794801333437, 0.5015695847101753, 0.37942173021591363,
        0.2874682758080624, 0.21528690664045466, 0.15248922036426643, 0.09238598217566764,
        0.03602810411814375,
      ],
    ],
    [
      0.5,
      [
        0.8955208397021168, 0.7420891248775641, 0.43481895990374275, 0.22926448879782635, 0.12569081762243975,
        0.08460882061000805, 0.07411057938365435, 0.07280761637665001, 0.06269339758610565,
        0.03216113296865019,
      ],
    ],
    [
      1,
      [
        0.7800926114826908, 0.4266458385563642, -0.014413690902535251, -0.06951502904739619,
        -0.036886979694308104, -0.020072457435395555, -0.019038058327231513, -0.017302710225031513,
        0.0020279011534077235, 0.019487021138597672,
      ],
    ],
    [
      2,
      [
        0.41297028918654755, -0.08395812223957703, 0.04500006329203099, -0.008137646481691914,
        -0.015549223530351885, -0.007669266937094203, -0.00817808475071278, -0.0016675126935617082,
        0.006245325966197743, -0.0017395273937387767,
      ],
    ],
  ])('for W020 = %f', (w20, expected) => {
    const out = new Float64Array(2);
    S.forEach((s, i) => {
      for (const direction of ['tangential', 'sagittal', 60] as const) {
        otf(wavefront({ w20 }), s, direction, out);
        expect(Math.hypot(out[0] - expected[i], out[1])).toBeLessThan(1e-9); // quadrature; 2e-10 measured
      }
    });
  });

  it.each([
    // own numerical integration of the same integral to 12 digits, no outside source
    [0.75, 0.2999893352004508],
    [1, 0.19305440637846877],
    [2, 0.08403496115577881],
  ])('for W020 = %f first changes its sign at %f', (w20, zero) => {
    const out = new Float64Array(2);
    otf(wavefront({ w20 }), zero - 1e-6, 'tangential', out);
    expect(out[0]).toBeGreaterThan(0);
    otf(wavefront({ w20 }), zero + 1e-6, 'tangential', out);
    expect(out[0]).toBeLessThan(0);
  });
});

describe('intensity on the axis', () => {
  it.each([0.1, 0.25, 0.5, 0.75, 1, 1.5, 2])('is sinc^2 of W020 = %f', (w20) => {
    // Source: Born and Wolf, Principles of Optics, 8.8.2 (cited from memory)
    const sinc = Math.sin(Math.PI * w20) / (Math.PI * w20);
    expect(Math.abs(strehlAtReference(line({ w20 }), 4) - sinc ** 2)).toBeLessThan(1e-7); // quadrature
  });
});

describe("Rayleigh's quarter wave", () => {
  it.each([
    // Source: delta = 2 N^2 lambda; Born and Wolf, 8.8.2 (cited from memory)
    [2, 4.4],
    [4, 17.6],
    [8, 70.4],
  ])('at f/%f and 550 nm is a shift of %f um', (fNumber, shiftUm) => {
    expect(Math.abs(defocusWaves(shiftUm, fNumber, 0.55) - 0.25)).toBeLessThan(1e-12);
    const rig = sampleRig({ lens: { fNumber }, mount: { sensorShiftUm: shiftUm } });
    expect(Math.abs(wavefrontAt(rig, 1, 0, 550).w20 - 0.25)).toBeLessThan(1e-12); // away from the lens is +
  });
});
