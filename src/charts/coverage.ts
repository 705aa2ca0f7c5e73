/** How much of a square a shape covers: exact, in closed form. */
import type { HalfPlane, Ring, Shape } from './shape.js';

/** Corners of the clipped square. A half-plane adds one corner at most, and no shape here has more than four.
 */
const MOST_CORNERS = 16;

/** Scratch: a polygon as x, y, x, y ... relative to the middle of the square, and the one that it is clipped
 * into. */
let polygon = new Float64Array(2 * MOST_CORNERS);
let clipped = new Float64Array(2 * MOST_CORNERS);

/** The share of a square's area inside of a shape, 0..1, right to about 1e-12.
 *
 * The square is clipped by each half-plane (Sutherland and Hodgman, CACM 17 (1974) 32, from memory); the
 * area of what is left is that of its triangles with the ring's middle, each cut by the circles in closed
 * form.
 *
 * @param x, y  middle of the square
 * @param side  of the square, parallel to the axes
 */
export function coverage(shape: Shape, x: number, y: number, side: number): number {
  const half = side / 2;
  polygon.set([-half, -half, half, -half, half, half, -half, half]);
  let corners = 4;
  for (const halfPlane of shape.halfPlanes) {
    corners = clip(corners, halfPlane.nx, halfPlane.ny, distanceIn(halfPlane, x, y));
    if (corners === 0) return 0;
  }
  const { ring } = shape;
  const area =
    ring === undefined
      ? polygonArea(corners)
      : areaInDisc(corners, ring.x - x, ring.y - y, ring.outerPx) -
        areaInDisc(corners, ring.x - x, ring.y - y, ring.innerPx);
  return Math.min(1, Math.max(0, area / (side * side)));
}

/** How far a point lies inside of a half-plane; negative outside. */
export function distanceIn({ nx, ny, c }: HalfPlane, x: number, y: number): number {
  return c - nx * x - ny * y;
}

/** How far a point lies inside of a ring; negative outside. */
export function distanceInRing(ring: Ring, x: number, y: number): number {
  const radius = Math.hypot(x - ring.x, y - ring.y);
  const fromOuter = ring.outerPx - radius;
  return ring.innerPx === 0 ? fromOuter : Math.min(fromOuter, radius - ring.innerPx);
}

/** Clip `polygon` to nx x + ny y <= c. @returns the number of corners that are left */
function clip(corners: number, nx: number, ny: number, c: number): number {
  let count = 0;
  for (let i = 0; i < corners; i++) {
    const j = i + 1 === corners ? 0 : i + 1;
    const px = polygon[2 * i];
    const py = polygon[2 * i + 1];
    const qx = polygon[2 * j];
    const qy = polygon[2 * j + 1];
    const p = c - nx * px - ny * py;
    const q = c - nx * qx - ny * qy;
    if (p >= 0) {
      clipped[2 * count] = px;
      clipped[2 * count + 1] = py;
      count++;
    }
    if (p >= 0 !== q >= 0) {
      const t = p / (p - q);
      clipped[2 * count] = px + t * (qx - px);
      clipped[2 * count + 1] = py + t * (qy - py);
      count++;
    }
  }
  [polygon, clipped] = [clipped, polygon];
  return count;
}

/** Gauss's area formula. */
function polygonArea(corners: number): number {
  let twice = 0;
  for (let i = 0; i < corners; i++) {
    const j = i + 1 === corners ? 0 : i + 1;
    twice += polygon[2 * i] * polygon[2 * j + 1] - polygon[2 * j] * polygon[2 * i + 1];
  }
  return twice / 2;
}

/** Area of `polygon` within the disc of a radius around (x, y). */
function areaInDisc(corners: number, x: number, y: number, radius: number): number {
  if (radius === 0) return 0;
  let area = 0;
  for (let i = 0; i < corners; i++) {
    const j = i + 1 === corners ? 0 : i + 1;
    area += triangleInDisc(
      polygon[2 * i] - x,
      polygon[2 * i + 1] - y,
      polygon[2 * j] - x,
      polygon[2 * j + 1] - y,
      radius,
    );
  }
  return area;
}

/** Signed area within the disc around the origin of the triangle of the origin, p and q: a triangle where the
 * side from p to q runs in the disc, circular sectors where it runs outside. */
function triangleInDisc(px: number, py: number, qx: number, qy: number, radius: number): number {
  const dx = qx - px;
  const dy = qy - py;
  // |p + t d|^2 = radius^2:  a t^2 + 2 b t + c = 0
  const a = dx * dx + dy * dy;
  const b = px * dx + py * dy;
  const c = px * px + py * py - radius * radius;
  const root2 = b * b - a * c;
  if (root2 <= 0 || a === 0) return circularSector(px, py, qx, qy, radius);
  const root = Math.sqrt(root2);
  const enter = (-b - root) / a;
  const leave = (-b + root) / a;
  if (enter >= 1 || leave <= 0) return circularSector(px, py, qx, qy, radius);
  const from = Math.max(0, enter);
  const to = Math.min(1, leave);
  const ax = px + from * dx;
  const ay = py + from * dy;
  const bx = px + to * dx;
  const by = py + to * dy;
  let area = (ax * by - bx * ay) / 2;
  if (enter > 0) area += circularSector(px, py, ax, ay, radius);
  if (leave < 1) area += circularSector(bx, by, qx, qy, radius);
  return area;
}

/** Signed area of the disc between the directions of p and q. */
function circularSector(px: number, py: number, qx: number, qy: number, radius: number): number {
  return (radius * radius * Math.atan2(px * qy - qx * py, px * qx + py * qy)) / 2;
}
