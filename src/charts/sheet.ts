/** The sheet that a chart is drawn on: the rig's sensor, seen from the scene's side, without distortion. */
import { pixelPitchMm, type Rig } from '../optics/rig.js';
import type { ChartPlane } from './draw.js';
import type { ChartPlace } from './truth.js';

export class Sheet {
  readonly rig: Rig;
  readonly width: number;
  readonly height: number;

  constructor(rig: Rig) {
    this.rig = rig;
    [this.width, this.height] = rig.camera.pixels;
  }

  /** A place with its field. On the axis itself, where the radius has no direction, the azimuth is 0. */
  place(x: number, y: number): ChartPlace {
    const [axisX, axisY] = this.rig.mount.axisPx;
    const [dx, dy] = [x - axisX, y - axisY];
    const field = (Math.hypot(dx, dy) * pixelPitchMm(this.rig.camera)) / this.rig.lens.fullFieldMm;
    return { x: tidy(x), y: tidy(y), field: tidy(field), azimuthDeg: tidy(wholeTurn(azimuth(dx, dy))) };
  }

  /** Whether a disc around a place lies on the sensor. */
  holds(x: number, y: number, radiusPx: number): boolean {
    const isWithin = (at: number, size: number) => at - radiusPx >= -0.5 && at + radiusPx <= size - 0.5;
    return isWithin(x, this.width) && isWithin(y, this.height);
  }

  /** A plane of one level. */
  blank(oversample: number, level: number): ChartPlane {
    const [width, height] = [this.width * oversample, this.height * oversample];
    return { width, height, oversample, samples: new Float32Array(width * height).fill(level) };
  }
}

function azimuth(dx: number, dy: number): number {
  return Math.hypot(dx, dy) < 1e-9 ? 0 : (Math.atan2(dy, dx) * 180) / Math.PI;
}

/** An angle as 0 up to 360. */
export function wholeTurn(degrees: number): number {
  const turned = ((degrees % 360) + 360) % 360;
  return turned > 360 - 1e-9 ? 0 : turned;
}

/** Nine decimals: far below any error of measurement, and short in a file. */
export function tidy(value: number): number {
  return Math.round(value * 1e9) / 1e9 + 0; // + 0 takes the sign off a zero
}
