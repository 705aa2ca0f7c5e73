/** Where the light lands: the warp alone, by plain TypeScript and by the compiled kernels. */
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { Crew } from '../../src/imaging/crew.js';
import { sensorFrame } from '../../src/imaging/sensor-frame.js';
import { radialTables, warpRows } from '../../src/imaging/warp.js';
import type { Rig } from '../../src/optics/rig.js';
import { type RigParts, sampleRig } from '../optics/samples.js';
import { BUSY_MS } from '../support/form.js';

vi.setConfig({ testTimeout: BUSY_MS });

let crew: Crew;
beforeAll(() => {
  crew = new Crew(2);
});
afterAll(() => crew.close());

type Warp = (rig: Rig, scene: Float32Array, oversample?: number, bandIndex?: number) => Promise<Float32Array>;

const plain: Warp = async (rig, scene, oversample = 1, bandIndex = 0) => {
  const frame = sensorFrame(rig, rig.camera.bands[bandIndex], oversample);
  const out = new Float32Array(scene.length);
  warpRows(frame, radialTables(rig.lens, frame), scene, out, 0, frame.height);
  return out;
};

const compiled: Warp = async (rig, scene, oversample = 1, bandIndex = 0) => {
  const { arena } = crew;
  const mark = arena.mark();
  const sceneAt = arena.allocateFloats(scene.length);
  const outAt = arena.allocateFloats(scene.length);
  arena.floats(sceneAt, scene.length).set(scene);
  const rowsPerTask = 7; // no divisor of the heights below
  const count = Math.ceil((rig.camera.pixels[1] * oversample) / rowsPerTask);
  const setup = { rig, bandIndex, oversample };
  await crew.run({ kind: 'warp', setup, planes: [{ sceneAt, outAt }], rowsPerTask, count });
  const out = Float32Array.from(arena.floats(outAt, scene.length));
  arena.release(mark);
  return out;
};

/** A rig without illumination's fall-off. */
const dark = (parts: RigParts) =>
  sampleRig({ ...parts, lens: { relativeIllumination: 'none', ...parts.lens } });

/** Distortion by c r^3 with a shift of `shiftPx` at `radiusPx` from the axis. */
function shifting(shiftPx: number, radiusPx: number, parts: RigParts): Rig {
  const rig = dark(parts);
  const { fNumber, wavelengthNm, fullFieldMm } = rig.lens;
  const pitchMm = rig.camera.pixelPitchUm / 1000;
  const h = (radiusPx * pitchMm) / fullFieldMm;
  const W311 = (-shiftPx * pitchMm) / (2 * fNumber * wavelengthNm * 1e-6 * h ** 3);
  return { ...rig, lens: { ...rig.lens, waves: { ...rig.lens.waves, W311 } } };
}

function planeOf(width: number, height: number, value: (x: number, y: number) => number): Float32Array {
  return Float32Array.from({ length: width * height }, (_, i) => value(i % width, Math.floor(i / width)));
}

describe.each([
  ['in plain TypeScript', plain],
  ['by the compiled kernels', compiled],
] as [string, Warp][])('the warp %s', (_, warp) => {
  it.each([
    [60, 1],
    [-60, 1],
    [-25, 2],
    [25, 3],
  ])(
    'takes each sample from its ideal place, %f px away, at %i samples a pixel',
    async (shiftPx, oversample) => {
      const [width, height] = [101, 84];
      const pixels = [width, height] as const;
      const rig = shifting(shiftPx, 1500, { camera: { pixels }, mount: { axisPx: [-900, 1150.25] } });
      const frame = sensorFrame(rig, rig.camera.bands[0], oversample);
      // Cubic convolution with a = -1/2 repeats quadratics without error (Keys 1981), so what comes out is the scene at the very place
      const scale = 1 / (frame.width * frame.height);
      const quadratic = (x: number, y: number) =>
        0.2 + scale * (0.3 * x * x - 0.2 * x * y + 0.25 * y * y + 3 * x);
      const out = await warp(rig, planeOf(frame.width, frame.height, quadratic), oversample);
      let worst = 0;
      let compared = 0;
      for (let y = 0; y < frame.height; y++) {
        for (let x = 0; x < frame.width; x++) {
          const landed = Math.hypot(x - frame.axisX, y - frame.axisY) * frame.pitchMm;
          const shrink = frame.map.ideal(landed) / landed;
          const idealX = frame.axisX + (x - frame.axisX) * shrink;
          const idealY = frame.axisY + (y - frame.axisY) * shrink;
          if (idealX < 2 || idealY < 2 || idealX > frame.width - 3 || idealY > frame.height - 3) continue;
          compared++;
          worst = Math.max(worst, Math.abs(out[y * frame.width + x] - quadratic(idealX, idealY)));
        }
      }
      expect(compared).toBeGreaterThan(0.1 * width * height);
      // float32 sums of values up to 1, and places right to 2e-5 px where the scene climbs by 0.01 a sample
      expect(worst).toBeLessThan(2e-6);
    },
  );

  it('goes on with the edge of the scene past its frame', async () => {
    const rig = shifting(-30, 100, { camera: { pixels: [120, 90] } });
    const scene = planeOf(120, 90, (x, y) => (x === 0 ? 0.25 : y === 89 ? 0.75 : 0.5));
    const out = await warp(rig, scene);
    // barrel draws what lies outside into the frame: its left side and its bottom, away from the corners
    expect(out[45 * 120]).toBeCloseTo(0.25, 6);
    expect(out[89 * 120 + 60]).toBeCloseTo(0.75, 6);
  });

  it('leaves a picture alone that lands where it should, to the bit', async () => {
    const scene = planeOf(33, 21, (x, y) => ((7 * x + 13 * y) % 17) / 17);
    expect(await warp(dark({ camera: { pixels: [33, 21] } }), scene)).toEqual(scene);
  });

  it('keeps a uniform scene uniform', async () => {
    const rig = shifting(-30, 100, { camera: { pixels: [120, 90] } });
    const out = await warp(rig, new Float32Array(120 * 90).fill(0.3));
    const worst = out.reduce((most, value) => Math.max(most, Math.abs(value - 0.3)), 0);
    expect(worst).toBeLessThan(2e-7); // the weights of a cubic sum to 1: float32 rounding of 0.3 is 3e-8
  });

  it('lets light fall off by the ideal place that it comes from', async () => {
    const rig = shifting(-30, 500, {
      lens: { relativeIllumination: 'cos4', focalLengthMm: 2 },
      camera: { pixels: [90, 60] },
      mount: { axisPx: [-400, -300] },
    });
    const out = await warp(rig, new Float32Array(90 * 60).fill(1));
    const frame = sensorFrame(rig, rig.camera.bands[0], 1);
    for (const [x, y] of [
      [0, 0],
      [89, 59],
      [40, 7],
    ]) {
      const ideal = frame.map.ideal(Math.hypot(x + 400, y + 300) * frame.pitchMm);
      // cos^4 of the field angle, by linear interpolation in a table of r^2, in float32: 2e-6 measured
      expect(Math.abs(out[y * 90 + x] - Math.cos(Math.atan(ideal / 2)) ** 4)).toBeLessThan(4e-6);
    }
    const undistorted = await warp(
      sampleRig({ lens: { focalLengthMm: 2 }, camera: { pixels: [9, 7] } }),
      new Float32Array(63).fill(0.5),
    );
    expect(undistorted[3 * 9 + 4]).toBe(0.5); // the axis
    expect(undistorted[0]).toBeCloseTo(0.5 * Math.cos(Math.atan((0.00345 * 5) / 2)) ** 4, 7);
  });

  it('moves each band by its own lateral colour', async () => {
    const bands = [
      { name: 'red', lines: [{ nm: 650, weight: 1 }] },
      { name: 'green', lines: [{ nm: 550, weight: 1 }] },
      { name: 'blue', lines: [{ nm: 450, weight: 1 }] },
    ];
    const lateralUm = [
      [450, 6.9],
      [650, -3.45],
    ] as const;
    const rig = dark({
      lens: { lateralUm },
      camera: { pixels: [101, 40], bands },
      mount: { axisPx: [-1100, 20] },
    });
    const ramp = planeOf(101, 40, (x) => x / 128);
    const shiftPx = async (band: number) => 50 - 128 * (await warp(rig, ramp, 1, band))[20 * 101 + 50];
    // h is 1150 px over 1159.4; +2 px outward at h = 1 for blue, -1 px for red. The scene seen at a place comes from farther in
    const h = (1150 * 0.00345) / 4;
    expect(await shiftPx(0)).toBeCloseTo((-1 * h) / (1 - 0.00345 / 4), 3);
    expect(await shiftPx(1)).toBe(0);
    expect(await shiftPx(2)).toBeCloseTo((2 * h) / (1 + 0.0069 / 4), 3);
  });
});

/** Share of the light of a disc in each sample, by 16 x 16 points. */
function disc(width: number, height: number, middleX: number, middleY: number, radius: number): Float32Array {
  return planeOf(width, height, (x, y) => {
    if (Math.hypot(x - middleX, y - middleY) > radius + 1) return 0;
    let inside = 0;
    for (let j = 0; j < 16; j++) {
      for (let i = 0; i < 16; i++) {
        const dx = x + (i + 0.5) / 16 - 0.5 - middleX;
        const dy = y + (j + 0.5) / 16 - 0.5 - middleY;
        if (dx * dx + dy * dy <= radius * radius) inside++;
      }
    }
    return inside / 256;
  });
}

describe('a disc lands where the distortion formula says', () => {
  const RADIUS_PX = 9;

  it.each([100, 40, 3.3, -3.3, -40, -100])('shifted by %f px', async (shiftPx) => {
    const [width, height] = [260, 220];
    const axisPx = [-1500, -1000] as [number, number];
    // start where the shift leads into the frame
    const [idealX, idealY] = shiftPx > 0 ? [60.3, 50.8] : [200.4, 160.7];
    const radiusPx = Math.hypot(idealX + 1500, idealY + 1000);
    const rig = shifting(shiftPx, radiusPx, { camera: { pixels: [width, height] }, mount: { axisPx } });
    const scene = disc(width, height, idealX, idealY, RADIUS_PX);
    for (const warp of [plain, compiled]) {
      const out = await warp(rig, scene);
      let sum = 0;
      let sumX = 0;
      let sumY = 0;
      out.forEach((value, i) => {
        sum += value;
        sumX += value * (i % width);
        sumY += value * Math.floor(i / width);
      });
      const scale = (radiusPx + shiftPx) / radiusPx;
      // what is promised; 0.008 px measured, which is the bend of the map over the disc
      expect(Math.abs(sumX / sum - (-1500 + (idealX + 1500) * scale))).toBeLessThan(0.03);
      expect(Math.abs(sumY / sum - (-1000 + (idealY + 1000) * scale))).toBeLessThan(0.03);
    }
  });
});

describe('a slanted edge lands where the distortion formula says', () => {
  it.each([100, -100])('shifted by %f px', async (shiftPx) => {
    const [width, height] = [320, 60];
    const axisPx = [-1700, 30] as [number, number];
    const rig = shifting(shiftPx, 1985, { camera: { pixels: [width, height] }, mount: { axisPx } });
    // the ideal edge: x = foot + slope * y
    const [foot, slope] = [shiftPx > 0 ? 70.3 : 230.6, 0.12];
    const along = Math.hypot(1, slope);
    // box-filtered edge, exact to the slant: ideal samples are means over their pixel
    const scene = planeOf(width, height, (x, y) =>
      Math.min(1, Math.max(0, (x - foot - slope * y) / along + 0.5)),
    );
    const frame = sensorFrame(rig, rig.camera.bands[0], 1);
    for (const warp of [plain, compiled]) {
      const out = await warp(rig, scene);
      const offsets: number[] = [];
      for (let y = 5; y < 55; y++) {
        // half height along the row
        let x = 2;
        while (out[y * width + x] < 0.5) x++;
        const [low, high] = [out[y * width + x - 1], out[y * width + x]];
        const crossing = x - 1 + (0.5 - low) / (high - low);
        const landed = Math.hypot(crossing + 1700, y - 30) * frame.pitchMm;
        const shrink = frame.map.ideal(landed) / landed;
        const idealX = -1700 + (crossing + 1700) * shrink;
        const idealY = 30 + (y - 30) * shrink;
        offsets.push(idealX - (foot + slope * idealY));
      }
      // The edge is sharper than its samples can show, so the flank of a single row scatters by 0.16 px. The line through all rows, which
      // cross pixels at 6 phases, is where it should be: 0.03 px is promised, 0.009 px measured
      expect(Math.abs(offsets.reduce((sum, offset) => sum + offset, 0) / offsets.length)).toBeLessThan(0.03);
    }
  });
});
