import { describe, expect, it } from 'vitest';
import { cornerMm, idealPoint, sensorFrame } from '../../src/imaging/sensor-frame.js';
import { sampleRig } from '../optics/samples.js';

const BAND = sampleRig().camera.bands[0];

describe('sensorFrame', () => {
  it('puts the middle of a pixel in the middle of its samples', () => {
    for (const oversample of [1, 2, 3, 4]) {
      const rig = sampleRig({ camera: { pixels: [20, 10] }, mount: { axisPx: [7, 3.25] } });
      const frame = sensorFrame(rig, BAND, oversample);
      expect([frame.width, frame.height]).toEqual([20 * oversample, 10 * oversample]);
      // samples 7k ... 7k + k - 1 make pixel 7
      expect(frame.axisX).toBe((7 * oversample + 7 * oversample + oversample - 1) / 2);
      expect(frame.axisY).toBeCloseTo(3.25 * oversample + (oversample - 1) / 2, 12);
      expect(frame.pitchMm).toBeCloseTo(0.00345 / oversample, 15);
    }
  });

  it('takes the middle of the array to its own middle', () => {
    const frame = sensorFrame(sampleRig({ camera: { pixels: [7, 4] } }), BAND, 3);
    expect([frame.axisX, frame.axisY]).toEqual([10, 5.5]);
  });
});

describe('idealPoint', () => {
  it('is where the light of a place comes from: the inverse of the distortion', () => {
    const rig = sampleRig({ waves: { W311: 40 }, mount: { axisPx: [500, 400] } });
    const frame = sensorFrame(rig, BAND, 2);
    const [xMm, yMm] = idealPoint(frame, 1700, -30);
    const ideal = Math.hypot(xMm, yMm);
    const landed = frame.map.distorted(ideal);
    expect(frame.axisX + (xMm / ideal) * (landed / frame.pitchMm)).toBeCloseTo(1700, 8);
    expect(frame.axisY + (yMm / ideal) * (landed / frame.pitchMm)).toBeCloseTo(-30, 8);
    expect(ideal).toBeGreaterThan(landed); // barrel draws points in
  });

  it('leaves the axis where it is', () => {
    const rig = sampleRig({ waves: { W311: 40, W111: 3 } });
    const frame = sensorFrame(rig, BAND, 1);
    expect(idealPoint(frame, frame.axisX, frame.axisY)).toEqual([0, 0]);
  });
});

describe('cornerMm', () => {
  it('reaches the outer corner of the farthest sample', () => {
    const rig = sampleRig({ camera: { pixels: [21, 11] }, mount: { axisPx: [4, 8] } });
    expect(cornerMm(sensorFrame(rig, BAND, 1))).toBeCloseTo(0.00345 * Math.hypot(16.5, 8.5), 12);
    // oversampling does not move it
    expect(cornerMm(sensorFrame(rig, BAND, 4))).toBeCloseTo(0.00345 * Math.hypot(16.5, 8.5), 12);
  });
});
