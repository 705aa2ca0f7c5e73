/** Where the patches of a chart stand. */
import { InputError } from '../errors.js';
import { type FieldSpec, fieldPoint } from '../optics/field-points.js';
import { pixelPitchMm } from '../optics/rig.js';
import type { SettledChoices } from './options.js';
import type { Sheet } from './sheet.js';
import type { ChartPlace } from './truth.js';

export interface PatchNeeds {
  /** Radius of the circle around a patch, in pixels. */
  radiusPx: number;
  /** Least distance of two patches. */
  apartPx: number;
  /** Patches that the default grid has at most, across and down. */
  most: number;
}

/** The middles of the patches: at the field points asked for, else on a grid.
 * @throws {InputError} patches that stand over the frame or over each other */
export function patchPlaces(sheet: Sheet, { grid, fields }: SettledChoices, needs: PatchNeeds): ChartPlace[] {
  if (fields === undefined) return onGrid(sheet, grid ?? defaultGrid(sheet, needs), needs);
  const { rig } = sheet;
  const pitchMm = pixelPitchMm(rig.camera);
  const places = fields.map((spec) => {
    const { xMm, yMm } = fieldPoint(rig, spec);
    return { spec, ...sheet.place(rig.mount.axisPx[0] + xMm / pitchMm, rig.mount.axisPx[1] + yMm / pitchMm) };
  });
  const outside = places.filter(({ x, y }) => !sheet.holds(x, y, needs.radiusPx));
  if (outside.length > 0)
    throw new InputError(
      outside.map(({ spec, x, y }) => ({
        key: '--fields',
        message: `a patch there stands over the frame`,
        found: `'${nameOf(spec)}' at (${x.toFixed(1)}, ${y.toFixed(1)}), reaching ${needs.radiusPx.toFixed(1)} px around it`,
        allowed: `places whose patch lies on the sensor of ${sheet.width} x ${sheet.height} pixels`,
        advice: 'Choose places further in, or a smaller --size.',
      })),
    );
  for (const [at, a] of places.entries()) {
    const near = places.slice(0, at).find((b) => Math.hypot(a.x - b.x, a.y - b.y) < needs.apartPx);
    if (near !== undefined)
      throw tooNear(`'${nameOf(near.spec)}' and '${nameOf(a.spec)}'`, '--fields', distance(a, near), needs);
  }
  return places.map(({ spec: _, ...place }) => place);
}

function onGrid(sheet: Sheet, [columns, rows]: readonly [number, number], needs: PatchNeeds): ChartPlace[] {
  const stepX = sheet.width / columns;
  const stepY = sheet.height / rows;
  const places = Array.from({ length: columns * rows }, (_, at) =>
    sheet.place(((at % columns) + 0.5) * stepX - 0.5, (Math.floor(at / columns) + 0.5) * stepY - 0.5),
  );
  const steps = [columns > 1 ? stepX : Number.POSITIVE_INFINITY, rows > 1 ? stepY : Number.POSITIVE_INFINITY];
  if (Math.min(...steps) < needs.apartPx)
    throw tooNear(`${columns}x${rows}`, '--grid', Math.min(...steps), needs);
  if (!places.every(({ x, y }) => sheet.holds(x, y, needs.radiusPx)))
    throw new InputError({
      key: '--size',
      message: 'the patches stand over the frame',
      found: `patches that reach ${needs.radiusPx.toFixed(1)} px around their middles`,
      allowed: `up to ${(Math.min(stepX, stepY) / 2).toFixed(1)} px on this grid and sensor`,
      advice: 'Choose a smaller --size or a coarser --grid.',
    });
  return places;
}

/** A field point as the command line writes it. */
function nameOf(spec: FieldSpec): string {
  if (typeof spec !== 'object') return String(spec);
  return spec.place ?? (spec.azimuthDeg === 0 ? String(spec.field) : `${spec.field}@${spec.azimuthDeg}`);
}

/** An odd number of patches each way, so that one stands in the middle. */
function defaultGrid(sheet: Sheet, { apartPx, most }: PatchNeeds): [columns: number, rows: number] {
  const odd = (count: number) => Math.max(1, count % 2 === 0 ? count - 1 : count);
  const count = (size: number) => odd(Math.min(most, Math.floor(size / apartPx)));
  return [count(sheet.width), count(sheet.height)];
}

function distance(a: ChartPlace, b: ChartPlace): number {
  return Math.hypot(a.x - b.x, a.y - b.y);
}

function tooNear(which: string, key: string, foundPx: number, { apartPx }: PatchNeeds): InputError {
  return new InputError({
    key,
    message: `patches stand too near to each other (${which})`,
    found: `${foundPx.toFixed(1)} px apart`,
    allowed: `from ${apartPx.toFixed(1)} px up`,
    advice: 'Choose fewer of them or a smaller --size.',
  });
}
