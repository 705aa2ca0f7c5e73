/** The spots of geometrical optics: of rays by the gradient of the wavefront, and of PSFs where many waves make them alike. */
import { describe, expect, it } from 'vitest';
import { KernelMaker } from '../../src/optics/psf.js';
import { type LocalWavefront, opticalPathWaves } from '../../src/optics/wavefront.js';
import { line, wavefront } from '../optics/samples.js';

/** Transverse ray aberration over 2 N lambda: eps = -grad W (Born and Wolf, Principles of Optics, 5.1; Welford; both from memory). */
function ray(terms: Partial<LocalWavefront>, rho: number, theta: number): [along: number, across: number] {
  const w = wavefront(terms);
  const [m, s] = [rho * Math.cos(theta), rho * Math.sin(theta)];
  const d = 1e-5; // the difference quotient of a quartic is right to d^2
  return [
    -(opticalPathWaves(w, m + d, s) - opticalPathWaves(w, m - d, s)) / (2 * d),
    -(opticalPathWaves(w, m, s + d) - opticalPathWaves(w, m, s - d)) / (2 * d),
  ];
}

/** Rays of even density over the pupil. */
function spot(terms: Partial<LocalWavefront>): [number, number][] {
  const rays: [number, number][] = [];
  for (let ring = 0; ring < 400; ring++) {
    const rho = Math.sqrt((ring + 0.5) / 400);
    for (let spoke = 0; spoke < 48; spoke++) rays.push(ray(terms, rho, ((spoke + 0.5) * Math.PI) / 24));
  }
  return rays;
}

function moments(rays: [number, number][]) {
  const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const along = mean(rays.map(([x]) => x));
  const across = mean(rays.map(([, y]) => y));
  const rms = Math.sqrt(mean(rays.map(([x, y]) => (x - along) ** 2 + (y - across) ** 2)));
  return { along, across, rms };
}

const TOLERANCE = 1e-3;

describe('spherical aberration, in units of 2 N lambda W040', () => {
  it.each([
    // Source: Born and Wolf, 5.3; Welford (from memory): paraxial, middle, least r.m.s., least confusion, marginal focus
    [0, 4, 2],
    [-1, 2, 0.816497],
    [-4 / 3, 1.333333, 0.666667],
    [-1.5, 1, Math.SQRT1_2],
    [-2, 1.539601, 1.154701],
  ])('at W020 / W040 = %f has a radius of %f and an r.m.s. of %f', (w20, radius, rms) => {
    let largest = 0;
    for (let step = 0; step <= 1000; step++)
      largest = Math.max(largest, Math.hypot(...ray({ w40: 1, w20 }, step / 1000, 1)));
    expect(Math.abs(largest / radius - 1)).toBeLessThan(TOLERANCE);
    expect(Math.abs(moments(spot({ w40: 1, w20 })).rms / rms - 1)).toBeLessThan(TOLERANCE);
  });

  it('has its least circle at 3/4 of the way to the marginal focus, a quarter of the paraxial blur', () => {
    // Source: Jenkins and White, Fundamentals of Optics, ch. 9 (from memory)
    const radius = (w20: number) => {
      let largest = 0;
      for (let step = 0; step <= 1000; step++)
        largest = Math.max(largest, Math.abs(ray({ w40: 1, w20 }, step / 1000, 0)[0]));
      return largest;
    };
    let least = 0;
    for (let w20 = 0; w20 >= -2; w20 -= 0.002) if (radius(w20) < radius(least)) least = w20;
    expect(Math.abs(least / -2 - 0.75)).toBeLessThan(TOLERANCE);
    expect(Math.abs(radius(least) / radius(0) - 0.25)).toBeLessThan(TOLERANCE);
  });
});

describe('coma, in units of 2 N lambda W131 h', () => {
  it.each([0.3, 0.7, 1])(
    'a zone rho = %f makes a circle of radius rho^2 about 2 rho^2, toward the axis',
    (rho) => {
      // Source: Born and Wolf, 5.3 (from memory)
      for (let theta = 0; theta < 6.28; theta += 0.2) {
        const [along, across] = ray({ w31: 1 }, rho, theta);
        expect(Math.abs(Math.hypot(along + 2 * rho ** 2, across) / rho ** 2 - 1)).toBeLessThan(TOLERANCE);
      }
    },
  );

  it('has tangential to sagittal coma as 3 : 1, its middle of light at -1 and an r.m.s. of 0.8165', () => {
    // Source: Jenkins and White, ch. 9 (from memory)
    expect(ray({ w31: 1 }, 1, 0)[0] / ray({ w31: 1 }, 1, Math.PI / 2)[0]).toBeCloseTo(3, 6);
    const { along, across, rms } = moments(spot({ w31: 1 }));
    expect(Math.abs(along + 1)).toBeLessThan(TOLERANCE);
    expect(Math.abs(across)).toBeLessThan(TOLERANCE);
    expect(Math.abs(rms / 0.816496581 - 1)).toBeLessThan(TOLERANCE);
  });

  it('fills a wedge of 60 degrees', () => {
    let widest = 0;
    for (let theta = 0; theta < 6.28; theta += 1e-3) {
      const [along, across] = ray({ w31: 1 }, 0.8, theta);
      widest = Math.max(widest, Math.atan2(Math.abs(across), -along));
    }
    expect(Math.abs((2 * widest) / (Math.PI / 3) - 1)).toBeLessThan(TOLERANCE);
  });
});

describe('astigmatism, in units of 2 N lambda W222 h^2', () => {
  // Source: Born and Wolf, 5.3; Welford (from memory)
  it('makes a line of half-length 2 along the radius at the sagittal focus, across it at the tangential one', () => {
    expect(ray({ w22: 1 }, 1, 0)[0]).toBeCloseTo(-2, 6);
    expect(ray({ w22: 1 }, 1, Math.PI)[0]).toBeCloseTo(2, 6);
    expect(Math.max(...spot({ w22: 1 }).map(([, across]) => Math.abs(across)))).toBeLessThan(TOLERANCE);
    expect(ray({ w22: 1, w20: -1 }, 1, Math.PI / 2)[1]).toBeCloseTo(2, 6);
    expect(Math.max(...spot({ w22: 1, w20: -1 }).map(([along]) => Math.abs(along)))).toBeLessThan(TOLERANCE);
  });

  it('makes a circle of radius 1 half-way between', () => {
    for (let theta = 0; theta < 6.28; theta += 0.2) {
      expect(Math.hypot(...ray({ w22: 1, w20: -0.5 }, 1, theta))).toBeCloseTo(1, 6);
    }
    expect(Math.abs(moments(spot({ w22: 1, w20: -0.5 })).rms / Math.SQRT1_2 - 1)).toBeLessThan(TOLERANCE);
    expect(Math.abs(moments(spot({ w22: 1 })).rms - 1)).toBeLessThan(TOLERANCE);
  });
});

describe('PSFs of 15 waves show these shapes', () => {
  const [N, NM, SIDE] = [4, 500, 181];
  const UNIT_UM = 2 * N * (NM / 1000) * 15; // 60 um
  const PITCH_UM = UNIT_UM / 24;

  /** Light by its place in units from the image point, x outward. */
  function light(terms: Partial<LocalWavefront>): { along: number; across: number; share: number }[] {
    const kernel = new Float64Array(SIDE * SIDE);
    const sampling = { fNumber: N, pitchUm: PITCH_UM, boxUm: PITCH_UM, shortestNm: NM, kernelPx: SIDE };
    new KernelMaker(sampling).bandKernel(line(terms, NM), kernel);
    const place = (i: number) => ((i - (SIDE - 1) / 2) * PITCH_UM) / UNIT_UM;
    return Array.from(kernel, (share, i) => ({
      along: place(i % SIDE),
      across: place(Math.floor(i / SIDE)),
      share,
    }));
  }
  const shareWhere = (psf: ReturnType<typeof light>, test: (along: number, across: number) => boolean) =>
    psf.reduce((sum, { along, across, share }) => sum + (test(along, across) ? share : 0), 0);

  it('coma: in its wedge toward the axis, as far out as the zones reach, by the density of rays', () => {
    const psf = light({ w31: 15 });
    const rays = spot({ w31: 1 });
    const inWedge = (along: number, across: number) =>
      along < 0.1 && Math.abs(across) < (0.1 - along) * Math.tan(Math.PI / 6);
    // diffraction throws some light past the geometric borders: 4 % measured
    expect(shareWhere(psf, (along, across) => inWedge(along, across) && along > -3.1)).toBeGreaterThan(0.94);
    for (const border of [-0.25, -0.5, -1, -2]) {
      const ofRays = rays.filter(([along]) => along > border).length / rays.length;
      expect(Math.abs(shareWhere(psf, (along) => along > border) - ofRays)).toBeLessThan(0.02); // 0.01 measured
    }
  });

  it('astigmatism: its two lines', () => {
    const line2 = (long: number, thin: number) => Math.abs(long) < 2.1 && Math.abs(thin) < 0.12;
    // a slit's diffraction fans out across the line: 4 % measured
    expect(shareWhere(light({ w22: 15 }), (along, across) => line2(along, across))).toBeGreaterThan(0.94);
    expect(shareWhere(light({ w22: 15, w20: -15 }), (along, across) => line2(across, along))).toBeGreaterThan(
      0.94,
    );
  });

  it('defocus and the medial focus: even discs of light', () => {
    for (const terms of [{ w20: 7.5 }, { w22: 15, w20: -7.5 }]) {
      const psf = light(terms);
      for (const radius of [0.3, 0.6, 0.9]) {
        const share = shareWhere(psf, (along, across) => Math.hypot(along, across) < radius);
        expect(Math.abs(share - radius ** 2)).toBeLessThan(0.07); // Fresnel ripples: 0.054 measured, in the middle
      }
    }
  });
});
