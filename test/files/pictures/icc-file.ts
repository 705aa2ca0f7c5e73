/** Colour profiles built by hand. Source: ICC.1:2022 (from memory). */

/** `curv` with a table, one gamma or none; `para` with its function type and parameters. */
export type Curve =
  | { gamma: number }
  | { table: readonly number[] }
  | { identity: true }
  | { type: number; parameters: readonly number[] };

export function rgbProfile(
  curves: readonly [Curve, Curve, Curve],
  columns: readonly (readonly number[])[],
): Buffer {
  return profile('RGB ', 'XYZ ', [
    ...['rTRC', 'gTRC', 'bTRC'].map((tag, at): [string, Buffer] => [tag, curveBytes(curves[at])]),
    ...['rXYZ', 'gXYZ', 'bXYZ'].map((tag, at): [string, Buffer] => [tag, xyzBytes(columns[at])]),
    ['wtpt', xyzBytes([0.9642, 1, 0.8249])],
  ]);
}

export function greyProfile(curve: Curve, connection = 'XYZ '): Buffer {
  return profile('GRAY', connection, [
    ['kTRC', curveBytes(curve)],
    ['wtpt', xyzBytes([0.9642, 1, 0.8249])],
  ]);
}

/** An RGB profile by table only: the corners of the colour cube in Lab, straight lines between them (lut8Type). */
export function cubeProfile(cornerLab: (r: number, g: number, b: number) => readonly number[]): Buffer {
  const head = Buffer.alloc(48);
  head.write('mft1', 0, 'latin1');
  head.set([3, 3, 2], 8); // channels in, channels out, grid points
  for (const at of [12, 28, 44]) head.writeInt32BE(65536, at); // unit matrix
  const straight = Buffer.from(Array.from({ length: 3 * 256 }, (_, i) => i % 256));
  const corners = [0, 1, 2, 3, 4, 5, 6, 7].flatMap((k) => {
    const [lightness, a, b] = cornerLab(k >> 2, (k >> 1) & 1, k & 1);
    return [Math.round(2.55 * lightness), a + 128, b + 128];
  });
  return profile('RGB ', 'Lab ', [
    ['A2B0', Buffer.concat([head, straight, Buffer.from(corners), straight])],
    ['wtpt', xyzBytes([0.9642, 1, 0.8249])],
  ]);
}

/** A profile with tags of one's own. */
export function profile(space: string, connection: string, tags: readonly [string, Buffer][]): Buffer {
  const head = Buffer.alloc(128);
  head.writeUInt32BE(0x04200000, 8); // version 4.2
  head.write('mntr', 12, 'latin1');
  head.write(space, 16, 'latin1');
  head.write(connection, 20, 'latin1');
  head.write('acsp', 36, 'latin1');
  [0.9642, 1, 0.8249].forEach((value, at) => {
    head.writeInt32BE(Math.round(value * 65536), 68 + 4 * at);
  });
  const table = Buffer.alloc(4 + 12 * tags.length);
  table.writeUInt32BE(tags.length, 0);
  const bodies: Buffer[] = [];
  let offset = 128 + table.length;
  tags.forEach(([signature, body], at) => {
    table.write(signature, 4 + 12 * at, 'latin1');
    table.writeUInt32BE(offset, 8 + 12 * at);
    table.writeUInt32BE(body.length, 12 + 12 * at);
    const padded = Buffer.concat([body, Buffer.alloc((4 - (body.length % 4)) % 4)]);
    bodies.push(padded);
    offset += padded.length;
  });
  head.writeUInt32BE(offset, 0);
  return Buffer.concat([head, table, ...bodies]);
}

function curveBytes(curve: Curve): Buffer {
  if ('type' in curve) {
    const out = Buffer.alloc(12 + 4 * curve.parameters.length);
    out.write('para', 0, 'latin1');
    out.writeUInt16BE(curve.type, 8);
    curve.parameters.forEach((value, at) => {
      out.writeInt32BE(Math.round(value * 65536), 12 + 4 * at);
    });
    return out;
  }
  const entries =
    'identity' in curve
      ? []
      : 'gamma' in curve
        ? [Math.round(curve.gamma * 256)]
        : curve.table.map((value) => Math.round(value * 65535));
  const out = Buffer.alloc(12 + 2 * entries.length);
  out.write('curv', 0, 'latin1');
  out.writeUInt32BE(entries.length, 8);
  entries.forEach((value, at) => {
    out.writeUInt16BE(value, 12 + 2 * at);
  });
  return out;
}

function xyzBytes(values: readonly number[]): Buffer {
  const out = Buffer.alloc(20);
  out.write('XYZ ', 0, 'latin1');
  values.forEach((value, at) => {
    out.writeInt32BE(Math.round(value * 65536), 8 + 4 * at);
  });
  return out;
}

/** sRGB, a column a primary. Source: B. Lindbloom, "RGB/XYZ Matrices", adapted to D50 (from memory). */
export const SRGB_COLUMNS = [
  [0.4360747, 0.2225045, 0.0139322],
  [0.3850649, 0.7168786, 0.0971045],
  [0.1430804, 0.0606169, 0.7141733],
] as const;

/** The wider primaries of opRGB (IEC 61966-2-5), same source. */
export const WIDE_COLUMNS = [
  [0.6097559, 0.3111242, 0.0194811],
  [0.2052401, 0.625656, 0.0608902],
  [0.149224, 0.0632197, 0.7448387],
] as const;

/** The sRGB curve as function type 3: g, a, b, c, d. */
export const SRGB_CURVE = {
  type: 3,
  parameters: [2.4, 1 / 1.055, 0.055 / 1.055, 1 / 12.92, 0.04045],
} as const;
