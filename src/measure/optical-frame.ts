/** Where a picture lies in the field of its lens: what is known of it from a rig or from a chart's truth. */
import { againstRadius } from '../charts/against-radius.js';
import type { ChartTruth, Modulation } from '../charts/truth.js';
import { type Band, pixelPitchMm, type Rig } from '../optics/rig.js';
import { type PlaceMap, rigMap } from './predict.js';

export interface OpticalFrame {
  axisPx: readonly [x: number, y: number];
  pitchMm: number;
  fullFieldMm: number;
}

export function opticalFrame(rig: Rig | undefined, truth: ChartTruth | undefined): OpticalFrame | undefined {
  if (rig !== undefined)
    return {
      axisPx: rig.mount.axisPx,
      pitchMm: pixelPitchMm(rig.camera),
      fullFieldMm: rig.lens.fullFieldMm,
    };
  if (truth !== undefined)
    return { axisPx: truth.axisPx, pitchMm: truth.pixelPitchUm / 1000, fullFieldMm: truth.fullFieldMm };
  return undefined;
}

/** No distortion is known: places are taken as they are. */
export const SAME_PLACE: PlaceMap = { landed: (x, y) => [x, y], ideal: (x, y) => [x, y] };

/** The map of a band, or none. */
export function mapOf(rig: Rig | undefined, band: Band | undefined): PlaceMap {
  return rig === undefined || band === undefined ? SAME_PLACE : rigMap(rig, band);
}

export interface FieldOfEdge {
  field: number;
  azimuthDeg: number;
  direction: Modulation;
  offRadiusDeg: number;
}

/** Field of an ideal place, and how a direction stands to its radius. */
export function fieldOfEdge(
  { axisPx, pitchMm, fullFieldMm }: OpticalFrame,
  x: number,
  y: number,
  normalDeg: number,
): FieldOfEdge {
  const [dx, dy] = [x - axisPx[0], y - axisPx[1]];
  const azimuthDeg = ((Math.atan2(dy, dx) * 180) / Math.PI + 360) % 360;
  const { isAlong, offDeg } = againstRadius(normalDeg, azimuthDeg);
  return {
    field: (Math.hypot(dx, dy) * pitchMm) / fullFieldMm,
    azimuthDeg,
    direction: isAlong ? 'tangential' : 'sagittal',
    offRadiusDeg: offDeg,
  };
}
