// @ts-check
/** Small pieces of SVG. */

/** A radial gradient in the drawing's own coordinates.
 * @param {string} id @param {number} cx @param {number} cy @param {number} r
 * @param {readonly (readonly [at: number, colour: string, opacity: number])[]} stops */
export function gradient(id, cx, cy, r, stops) {
  const list = stops.map(
    ([at, colour, opacity]) =>
      `<stop offset="${at}" stop-color="${colour}" stop-opacity="${fixed(opacity)}"/>`,
  );
  const place = `cx="${fixed(cx)}" cy="${fixed(cy)}" r="${fixed(r)}"`;
  return `<radialGradient id="${id}" gradientUnits="userSpaceOnUse" ${place}>${list.join('')}</radialGradient>`;
}

/** A closed curve through the points (Catmull-Rom as cubic Bezier pieces).
 * @param {readonly (readonly [number, number])[]} points */
export function smoothClosed(points) {
  const at = (/** @type {number} */ index) => points[(index + points.length) % points.length];
  let path = `M${fixed(points[0][0])} ${fixed(points[0][1])}`;
  points.forEach(([x, y], index) => {
    const [before, next, after] = [at(index - 1), at(index + 1), at(index + 2)];
    const c1 = [x + (next[0] - before[0]) / 6, y + (next[1] - before[1]) / 6];
    const c2 = [next[0] - (after[0] - x) / 6, next[1] - (after[1] - y) / 6];
    path += `C${[...c1, ...c2, ...next].map(fixed).join(' ')}`;
  });
  return `${path}Z`;
}

/** A colour between two, in sRGB numbers. @param {string} a @param {string} b @param {number} share  of b, 0..1 */
export function mix(a, b, share) {
  const parts = [1, 3, 5].map((start) => {
    const [from, to] = [a, b].map((colour) => Number.parseInt(colour.slice(start, start + 2), 16));
    return Math.round(from + (to - from) * share)
      .toString(16)
      .padStart(2, '0');
  });
  return `#${parts.join('')}`;
}

/** A coordinate to a hundredth of a pixel, so that the drawing stays short. @param {number} value */
export function fixed(value) {
  return Number(value.toFixed(2));
}
