/** Outlines of labels on their way through the lens. */
import polygonClipping from 'polygon-clipping';

export type Point = readonly [x: number, y: number];

/** A closed outline, without its first point repeated at the end. */
export type Ring = readonly Point[];

/** How far a straight piece of a moved outline may lie from where the lens really puts it, in pixels. */
const SAGITTA_PX = 0.02;
/** Halvings of one side; the error falls fourfold with each. */
const MOST_HALVINGS = 12;

/** Move an outline by a map, with so many points put between its corners that its sides follow the map's curves. */
export function movedRing(ring: Ring, move: (x: number, y: number) => [x: number, y: number]): Ring {
  const moved: Point[] = [];
  const ends = ring.map(([x, y]) => move(x, y));
  for (const [at, from] of ring.entries()) {
    const next = (at + 1) % ring.length;
    moved.push(ends[at]);
    bend(moved, from, ring[next], ends[at], ends[next], move, MOST_HALVINGS);
  }
  return moved;
}

/** Put the points between two ends of a side. */
function bend(
  out: Point[],
  from: Point,
  to: Point,
  movedFrom: Point,
  movedTo: Point,
  move: (x: number, y: number) => [x: number, y: number],
  halvings: number,
): void {
  const middle: Point = [(from[0] + to[0]) / 2, (from[1] + to[1]) / 2];
  const moved = move(middle[0], middle[1]);
  const off = Math.hypot(
    moved[0] - (movedFrom[0] + movedTo[0]) / 2,
    moved[1] - (movedFrom[1] + movedTo[1]) / 2,
  );
  // an S-shaped side may have its middle on the straight line: long sides are halved once in any case
  const isLong = halvings === MOST_HALVINGS && Math.hypot(to[0] - from[0], to[1] - from[1]) > LONG_PX;
  if ((off <= SAGITTA_PX && !isLong) || halvings === 0) return;
  bend(out, from, middle, movedFrom, moved, move, halvings - 1);
  out.push(moved);
  bend(out, middle, to, moved, movedTo, move, halvings - 1);
}

const LONG_PX = 32;

/** The area inside a ring, by the shoelace formula; positive whichever way it turns. */
export function ringArea(ring: Ring): number {
  let twice = 0;
  for (const [at, [x, y]] of ring.entries()) {
    const [nextX, nextY] = ring[(at + 1) % ring.length];
    twice += x * nextY - nextX * y;
  }
  return Math.abs(twice) / 2;
}

/** The area of several rings, each counted by itself: parts of a label do not overlap. */
export function ringsArea(rings: readonly Ring[]): number {
  return rings.reduce((sum, ring) => sum + ringArea(ring), 0);
}

/** x, y, width, height of the smallest upright box about points; undefined for none. */
export function boxAbout(points: Iterable<Point>): [number, number, number, number] | undefined {
  let [left, top, right, bottom] = [
    Number.POSITIVE_INFINITY,
    Number.POSITIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
  ];
  for (const [x, y] of points) {
    left = Math.min(left, x);
    right = Math.max(right, x);
    top = Math.min(top, y);
    bottom = Math.max(bottom, y);
  }
  return left <= right ? [left, top, right - left, bottom - top] : undefined;
}

/** Places for the clipper: on a grid far finer than what is written, so that no two points are all but the same. */
function snap(px: number): number {
  return Math.round(px * 2 ** 14) / 2 ** 14;
}

/** What of an outline lies in the frame 0..width x 0..height: none, one or several rings. */
export function clippedRing(ring: Ring, width: number, height: number): Ring[] {
  const box = boxAbout(ring);
  if (box === undefined) return [];
  const [left, top, boxWidth, boxHeight] = box;
  const [right, bottom] = [left + boxWidth, top + boxHeight];
  if (left >= width || top >= height || right <= 0 || bottom <= 0) return [];
  if (left >= 0 && top >= 0 && right <= width && bottom <= height) return [ring];
  const frame: [number, number][] = [
    [0, 0],
    [width, 0],
    [width, height],
    [0, height],
  ];
  const snapped = ring.map(([x, y]): [number, number] => [snap(x), snap(y)]);
  const parts = polygonClipping.intersection([snapped], [frame]);
  // the clipper closes its rings; the outlines of COCO files have no holes, and neither has an outline cut by a frame
  return parts.map(([outer]) => outer.slice(0, -1));
}
