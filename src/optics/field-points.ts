/** Field points as people name them: a field h, an azimuth, or a place on the sensor. */
import { InputError } from '../errors.js';
import { isSymmetric, pixelPitchMm, type Rig } from './rig.js';

/** The places of a sensor by name: which side of it in x and in y. The middle has no name, since `axis` is
 * where the optical axis is. */
const SIDES = {
  top: [0, -1],
  bottom: [0, 1],
  left: [-1, 0],
  right: [1, 0],
  top_left: [-1, -1],
  top_right: [1, -1],
  bottom_left: [-1, 1],
  bottom_right: [1, 1],
} as const;

export type Place = 'axis' | keyof typeof SIDES;

/** Every place by name, in the order in which reports list them. */
export const PLACES: readonly Place[] = ['axis', ...(Object.keys(SIDES) as (keyof typeof SIDES)[])];

/** The farthest field that is taken at its word. Figures past h = 1 are extrapolated; past this they say
 * nothing at all. */
export const LARGEST_FIELD = 10;

/** A field point as it was asked for, not yet on a sensor. */
export type FieldRequest =
  | { place: Place; field?: undefined; azimuthDeg?: undefined }
  | { place?: undefined; field: number; azimuthDeg: number };

/** What names a field point: h along +x; text such as `0.7`, `0.7@90` or `top_right`; or what
 * `parseFieldPoint` made of it. */
export type FieldSpec = number | string | FieldRequest;

/** A field point on a rig's sensor, in ideal coordinates: where its light lands without distortion. */
export interface FieldPoint {
  /** h = image height / full field. */
  field: number;
  /** From +x toward +y (down), 0 up to 360; 0 on the axis. */
  azimuthDeg: number;
  /** The name of the place, where it was asked for by name. */
  place: Place | null;
  /** From the optical axis, + right and + down. */
  xMm: number;
  yMm: number;
}

/** Reads a field point: `0.7` is h = 0.7 along +x, `0.7@90` at an azimuth of 90 degrees from +x toward +y;
 * else the name of a place.
 * @throws {InputError} where it is none of these, or h is negative, not finite or above 10 */
export function parseFieldPoint(spec: FieldSpec): FieldRequest {
  if (typeof spec === 'number') return checkedRequest(spec, 0, String(spec));
  if (typeof spec === 'string') return parseText(spec.trim());
  if (spec.place === undefined)
    return checkedRequest(spec.field, spec.azimuthDeg, `${spec.field}@${spec.azimuthDeg}`);
  return parseText(spec.place);
}

function parseText(text: string): FieldRequest {
  const place = PLACES.find((name) => name === text);
  if (place !== undefined) return { place };
  const parts = text.split('@');
  const isNumeric = parts.length <= 2 && parts.every((part) => NUMBER.test(part.trim()));
  if (!isNumeric) throw refusal('no field point has this name', text);
  return checkedRequest(Number(parts[0]), Number(parts[1] ?? 0), text);
}

/** Decimal notation: no empty text, no hexadecimal, no `Infinity`. */
const NUMBER = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i;

function checkedRequest(field: number, azimuthDeg: number, text: string): FieldRequest {
  if (!(field >= 0 && field <= LARGEST_FIELD)) throw refusal('the field h is out of range', text);
  if (!Number.isFinite(azimuthDeg)) throw refusal('the azimuth is not a finite number', text);
  return { field, azimuthDeg };
}

function refusal(message: string, found: string): InputError {
  const near = nearestPlace(found);
  return new InputError({
    key: 'field point',
    message,
    found: `'${found}'`,
    allowed:
      `h from 0 to ${LARGEST_FIELD}, alone or with an azimuth in degrees (0.7, 0.7@90), ` +
      `or ${PLACES.join(', ')}`,
    advice: near === undefined ? undefined : `Did you mean '${near}'?`,
  });
}

/** The place whose letters are nearest, in whatever order: `right-top` and `topright` are likelier slips than
 * a wrong letter. */
function nearestPlace(text: string): Place | undefined {
  const ranked = PLACES.map((place) => ({ place, differ: lettersApart(text.toLowerCase(), place) }));
  const best = ranked.reduce((a, b) => (b.differ < a.differ ? b : a));
  return best.differ <= best.place.length / 3 ? best.place : undefined;
}

/** Number of letters that one word has and the other lacks. */
function lettersApart(a: string, b: string): number {
  const count = new Map<string, number>();
  for (const letter of a.match(/[a-z]/g) ?? []) count.set(letter, (count.get(letter) ?? 0) + 1);
  for (const letter of b.match(/[a-z]/g) ?? []) count.set(letter, (count.get(letter) ?? 0) - 1);
  return [...count.values()].reduce((sum, surplus) => sum + Math.abs(surplus), 0);
}

/** A field point on a rig's sensor. Sides and corners are the middles of the outermost pixels.
 * @throws {InputError} as `parseFieldPoint` */
export function fieldPoint(rig: Rig, spec: FieldSpec): FieldPoint {
  const request = parseFieldPoint(spec);
  const { fullFieldMm } = rig.lens;
  if (request.place === undefined) {
    const radiusMm = request.field * fullFieldMm;
    const azimuth = (request.azimuthDeg * Math.PI) / 180;
    return {
      field: request.field,
      azimuthDeg: wholeTurn(request.azimuthDeg),
      place: null,
      xMm: radiusMm * Math.cos(azimuth),
      yMm: radiusMm * Math.sin(azimuth),
    };
  }
  const { place } = request;
  if (place === 'axis') return { field: 0, azimuthDeg: 0, place, xMm: 0, yMm: 0 };
  const pitchMm = pixelPitchMm(rig.camera);
  const [sideX, sideY] = SIDES[place];
  const [width, height] = rig.camera.pixels;
  const [axisX, axisY] = rig.mount.axisPx;
  const xMm = pitchMm * (0.5 * (1 + sideX) * (width - 1) - axisX);
  const yMm = pitchMm * (0.5 * (1 + sideY) * (height - 1) - axisY);
  return {
    field: Math.hypot(xMm, yMm) / fullFieldMm,
    azimuthDeg: wholeTurn((Math.atan2(yMm, xMm) * 180) / Math.PI),
    place,
    xMm,
    yMm,
  };
}

function wholeTurn(degrees: number): number {
  const turned = ((degrees % 360) + 360) % 360;
  return turned === 360 ? 0 : turned; // -1e-20 rounds up to a full turn
}

/** The field points of a rig where none are named: axis, top, right and top_right where the lens does the
 * same in all four quadrants, else all nine places. */
export function defaultFields(rig: Rig): readonly Place[] {
  return isSymmetric(rig) ? ['axis', 'top', 'right', 'top_right'] : PLACES;
}
