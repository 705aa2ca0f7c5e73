/** The one kind of thing that charts are made of: a convex figure, cut to a ring where one is wanted. */

/** The points with nx x + ny y <= c; (nx, ny) has unit length and points out of the figure. */
export interface HalfPlane {
  nx: number;
  ny: number;
  c: number;
}

/** The points between two circles. */
export interface Ring {
  x: number;
  y: number;
  /** 0: a whole disc. */
  innerPx: number;
  outerPx: number;
}

/** All points inside of every half-plane and of the ring. In sensor pixels, pixel (0, 0) having its middle at
 * (0, 0). */
export interface Shape {
  halfPlanes: readonly HalfPlane[];
  ring?: Ring;
}

/** A disc. */
export function disc(x: number, y: number, radiusPx: number): Shape {
  return { halfPlanes: [], ring: { x, y, innerPx: 0, outerPx: radiusPx } };
}

/** A rectangle around (x, y): `alongPx` long in the direction `angleDeg` (from +x toward +y), `acrossPx`
 * wide. */
export function rectangle(x: number, y: number, alongPx: number, acrossPx: number, angleDeg: number): Shape {
  const sides = [alongPx, acrossPx, alongPx, acrossPx];
  return {
    halfPlanes: sides.map((size, turn) => {
      const { nx, ny } = direction(angleDeg + 90 * turn);
      return { nx, ny, c: nx * x + ny * y + size / 2 };
    }),
  };
}

/** The part of a ring between two directions, less than half a turn apart, from `fromDeg` on toward +y. */
export function sector(ring: Ring, fromDeg: number, toDeg: number): Shape {
  const side = (angleDeg: number): HalfPlane => {
    const { nx, ny } = direction(angleDeg);
    return { nx, ny, c: nx * ring.x + ny * ring.y };
  };
  return { halfPlanes: [side(fromDeg - 90), side(toDeg + 90)], ring };
}

/** The unit vector at an angle from +x toward +y, exact at quarter turns. */
export function direction(angleDeg: number): { nx: number; ny: number } {
  const turned = ((angleDeg % 360) + 360) % 360;
  if (turned % 90 === 0) {
    const quarter = turned / 90;
    return { nx: [1, 0, -1, 0][quarter], ny: [0, 1, 0, -1][quarter] };
  }
  const angle = (turned * Math.PI) / 180;
  return { nx: Math.cos(angle), ny: Math.sin(angle) };
}
