// @ts-check
/** Apples on a belt, seen from above between two rails with a rule. */
import { drawApple, SKINS } from './apple.js';
import { randomStream } from './random.js';
import { text } from './stroke-font.js';
import { gradient } from './svg.js';

/** A pixel is 0.4 mm on the belt. */
const PX_PER_MM = 2.5;
/** Height of the rail along the upper and the lower side. */
const RAIL = 58;
const LINK = 64;

/** @param {{ width?: number, height?: number, seed?: number }} [options] in pixels
 * @returns {import('./rasterise.js').Drawing} */
export function appleBelt({ width = 1920, height = 1200, seed = 3 } = {}) {
  const random = randomStream(seed);
  const apples = scatter(width, height, random).map((place, index) => ({
    ...place,
    skin: random.pick(SKINS),
    sticker: index % 3 === 0,
    number: random.whole(201, 498),
  }));
  const drawn = apples.map((apple, index) => drawApple(apple, random, `a${index}`));
  const leaves = Array.from({ length: Math.round((width * height) / 330_000) }, (_, index) =>
    leaf(random.between(60, width - 60), random.between(RAIL + 60, height - RAIL - 60), random, `l${index}`),
  );
  const body = [
    belt(width, height, random),
    ...drawn.map(({ shadow }) => shadow),
    ...drawn.map(({ body }) => body),
    ...leaves.map(({ body }) => body),
    rail(width, 0, 1),
    rail(width, height, -1),
  ].join('');
  /** @type {import('./labels.js').Label[]} */
  const labels = [
    ...drawn.map(({ outline, stem }) => ({
      category: 'apple',
      outline: clip(outline, width, height),
      keypoints: [inside(stem, width, height)],
    })),
    ...leaves.map(({ outline }) => ({ category: 'leaf', outline: clip(outline, width, height) })),
  ].filter(({ outline }) => outline.length > 0);
  return { width, height, colour: true, finer: 2, body, labels };
}

/** Places for apples of 62 to 86 mm that touch at most: darts thrown until no more fit.
 * @param {number} width @param {number} height @param {import('./apple.js').RandomStream} random */
function scatter(width, height, random) {
  /** @type {{ x: number, y: number, radius: number }[]} */
  const placed = [];
  for (let dart = 0; dart < 4000; dart++) {
    const radius = (random.between(62, 86) / 2) * PX_PER_MM;
    const x = random.between(-0.3 * radius, width + 0.3 * radius);
    const y = random.between(RAIL + radius + 4, height - RAIL - radius - 4);
    if (placed.every((other) => Math.hypot(x - other.x, y - other.y) > 1.015 * (radius + other.radius)))
      placed.push({ x, y, radius });
  }
  return placed;
}

/** The belt: links with slots in brick order, and a few scuffs.
 * @param {number} width @param {number} height @param {import('./apple.js').RandomStream} random */
function belt(width, height, random) {
  let slots = '';
  let lit = '';
  let seams = '';
  let scuffs = '';
  for (let left = -LINK / 2; left < width; left += LINK) {
    seams += `M${left} 0V${height}`;
    for (let row = 0, top = RAIL + 4; top < height - RAIL; row++, top += 22) {
      const x = left + 12 + (row % 2) * 20;
      slots += `M${x} ${top}h14a4.5 4.5 0 0 1 0 9h-14a4.5 4.5 0 0 1 0 -9z`;
      lit += `M${x - 1} ${top + 10}h16`;
    }
  }
  for (let count = 0; count < 130; count++) {
    const [x, y] = [random.between(0, width), random.between(RAIL, height - RAIL)];
    scuffs += `M${x.toFixed(1)} ${y.toFixed(1)}l${random.between(-34, 34).toFixed(1)} ${random.between(-4, 4).toFixed(1)}`;
  }
  return (
    `<rect width="${width}" height="${height}" fill="#2d6470"/>` +
    `<path d="${scuffs}" stroke="#4d8791" stroke-width="1.1" stroke-opacity="0.5" fill="none" stroke-linecap="round"/>` +
    `<path d="${seams}" stroke="#173a43" stroke-width="3" fill="none"/>` +
    `<path transform="translate(2.4 0)" d="${seams}" stroke="#4a8894" stroke-width="1.2" fill="none"/>` +
    `<path d="${slots}" fill="#153840"/>` +
    `<path d="${lit}" stroke="#568f9a" stroke-width="1.1" fill="none"/>`
  );
}

/** A rail with a rule: a short stroke every 2 mm, a long one and a number every 10 mm.
 * @param {number} width @param {number} edge  upper or lower side of the picture  @param {1 | -1} inward */
function rail(width, edge, inward) {
  const inner = edge + inward * RAIL;
  const ends = [9, 14, 20];
  let strokes = '';
  let numbers = '';
  for (let mm = 0; mm * PX_PER_MM <= width; mm += 2) {
    const x = mm * PX_PER_MM;
    const length = mm % 10 === 0 ? ends[2] : mm % 10 === 4 || mm % 10 === 6 ? ends[0] : ends[1];
    strokes += `M${x} ${inner}v${-inward * length}`;
    if (mm % 20 === 10)
      numbers += text(mm.toString(), {
        x,
        y: edge + inward * 23 + 6.5,
        capHeight: 13,
        weight: 0.14,
        ink: '#14181a',
        anchor: 'middle',
      });
  }
  const top = Math.min(edge, inner);
  return (
    `<rect y="${inward > 0 ? inner : inner - 7}" width="${width}" height="7" fill="#0a1719" fill-opacity="0.55"/>` +
    `<rect y="${top}" width="${width}" height="${RAIL}" fill="#d6d8d2"/>` +
    `<rect y="${edge + inward * RAIL - (inward > 0 ? 2 : 0)}" width="${width}" height="2" fill="#8d918e"/>` +
    `<path d="${strokes}" stroke="#14181a" stroke-width="1.8" fill="none"/>${numbers}`
  );
}

/** A leaf with its veins. @param {number} x @param {number} y @param {import('./apple.js').RandomStream} random @param {string} id */
function leaf(x, y, random, id) {
  const long = random.between(62, 92);
  const wide = long * random.between(0.24, 0.32);
  const turn = random.between(0, 2 * Math.PI);
  const green = random.pick(['#4f8a2f', '#6a9a35', '#3f7a34', '#8a9a3a']);
  const edge = `M${-long} 0C${-0.5 * long} ${-1.3 * wide} ${0.4 * long} ${-1.2 * wide} ${long} 0C${0.4 * long} ${1.2 * wide} ${-0.5 * long} ${1.3 * wide} ${-long} 0Z`;
  let veins = `M${-1.2 * long} 3Q${-long} 0 ${0.94 * long} 0`;
  for (let vein = -0.62; vein < 0.7; vein += 0.22) {
    const reach = 0.72 * wide * Math.cos(1.35 * vein);
    veins += `M${vein * long} 0q${0.1 * long} ${-0.7 * reach} ${0.19 * long} ${-reach}M${vein * long} 0q${0.1 * long} ${0.7 * reach} ${0.19 * long} ${reach}`;
  }
  const place = (/** @type {number} */ dx, /** @type {number} */ dy) =>
    `translate(${(x + dx).toFixed(1)} ${(y + dy).toFixed(1)}) rotate(${((turn * 180) / Math.PI).toFixed(1)})`;
  const body =
    gradient(id, -0.2 * long, -0.5 * wide, 1.2 * long, [
      [0, '#a9cf6a', 1],
      [0.35, green, 1],
      [1, '#1f4a1e', 1],
    ]) +
    `<path transform="${place(6, 8)}" d="${edge}" fill="#05100f" fill-opacity="0.45"/>` +
    `<path transform="${place(0, 0)}" d="${edge}" fill="url(#${id})"/>` +
    `<path transform="${place(0, 0)}" d="${veins}" fill="none" stroke="#cfe39a" stroke-width="1.3" stroke-linecap="round" stroke-opacity="0.85"/>`;
  return { body, outline: leafOutline(x, y, long, wide, turn) };
}

/** The leaf's edge (its two cubic Bezier curves) as a polygon.
 * @param {number} x @param {number} y @param {number} long @param {number} wide @param {number} turn
 * @returns {[number, number][]} */
function leafOutline(x, y, long, wide, turn) {
  const STEPS = 10;
  const across = [0, -1.3 * wide, -1.2 * wide, 0];
  const along = [-long, -0.5 * long, 0.4 * long, long];
  const at = (/** @type {readonly number[]} */ p, /** @type {number} */ t) =>
    (1 - t) ** 3 * p[0] + 3 * t * (1 - t) ** 2 * p[1] + 3 * t * t * (1 - t) * p[2] + t ** 3 * p[3];
  return Array.from({ length: 2 * STEPS }, (_, index) => {
    const t = index <= STEPS ? index / STEPS : 2 - index / STEPS;
    const [u, v] = [at(along, t), index <= STEPS ? at(across, t) : -at(across, t)];
    return [x + u * Math.cos(turn) - v * Math.sin(turn), y + u * Math.sin(turn) + v * Math.cos(turn)];
  });
}

/** The part of a polygon inside the picture (Sutherland and Hodgman's way: one side of the frame after the other).
 * @param {[number, number][]} outline @param {number} width @param {number} height @returns {[number, number][]} */
function clip(outline, width, height) {
  const sides = [
    { axis: 0, limit: 0, sign: 1 },
    { axis: 0, limit: width, sign: -1 },
    { axis: 1, limit: 0, sign: 1 },
    { axis: 1, limit: height, sign: -1 },
  ];
  let kept = outline;
  for (const { axis, limit, sign } of sides) {
    const depth = (/** @type {[number, number]} */ point) => sign * (point[axis] - limit);
    kept = kept.flatMap((point, index) => {
      const before = kept[(index + kept.length - 1) % kept.length];
      const [here, there] = [depth(point), depth(before)];
      /** @type {[number, number][]} */
      const out = [];
      if (here * there < 0) {
        const share = there / (there - here);
        /** @type {[number, number]} */
        const crossing = [
          before[0] + share * (point[0] - before[0]),
          before[1] + share * (point[1] - before[1]),
        ];
        crossing[axis] = limit; // to the last digit
        out.push(crossing);
      }
      if (here >= 0) out.push(point);
      return out;
    });
  }
  return kept;
}

/** @param {[number, number] | undefined} point @param {number} width @param {number} height */
function inside(point, width, height) {
  if (point === undefined) return undefined;
  const [x, y] = point;
  return x >= 0 && y >= 0 && x <= width && y <= height ? point : undefined;
}
