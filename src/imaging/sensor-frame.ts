/** Where the samples of a picture lie on the sensor and in the field. */
import { type DistortionMap, distortionMap } from '../optics/distortion.js';
import type { Band, Rig } from '../optics/rig.js';
import { pixelPitchMm } from '../optics/rig.js';

/** The samples of one band's picture: `oversample` x `oversample` of them make a pixel. */
export interface SensorFrame {
  width: number;
  height: number;
  oversample: number;
  /** Distance of samples. */
  pitchMm: number;
  /** Where the optical axis meets the picture, in samples. */
  axisX: number;
  axisY: number;
  /** From ideal to distorted radius, in mm. */
  map: DistortionMap;
}

/** The frame of a band of a rig at an oversampling. */
export function sensorFrame(rig: Rig, band: Band, oversample: number): SensorFrame {
  const [width, height] = rig.camera.pixels;
  // pixel P covers the samples P k .. P k + k - 1; its middle is at P k + (k - 1) / 2
  const toSamples = (px: number) => px * oversample + (oversample - 1) / 2;
  return {
    width: width * oversample,
    height: height * oversample,
    oversample,
    pitchMm: pixelPitchMm(rig.camera) / oversample,
    axisX: toSamples(rig.mount.axisPx[0]),
    axisY: toSamples(rig.mount.axisPx[1]),
    map: distortionMap(rig.lens, band),
  };
}

/** The ideal image point whose light lands at a place of the picture.
 * @param x, y place in samples
 * @returns [xMm, yMm] from the optical axis */
export function idealPoint(frame: SensorFrame, x: number, y: number): [xMm: number, yMm: number] {
  const xMm = (x - frame.axisX) * frame.pitchMm;
  const yMm = (y - frame.axisY) * frame.pitchMm;
  const landed = Math.hypot(xMm, yMm);
  const scale = landed === 0 ? 1 / frame.map.a : frame.map.ideal(landed) / landed;
  return [xMm * scale, yMm * scale];
}

/** Distance from the axis of the frame's farthest corner, in mm on the sensor. */
export function cornerMm(frame: SensorFrame): number {
  const farthest = (axis: number, size: number) => Math.max(axis + 0.5, size - 0.5 - axis);
  return frame.pitchMm * Math.hypot(farthest(frame.axisX, frame.width), farthest(frame.axisY, frame.height));
}
