// @ts-check
/** One apple seen from above: a ball with a stem end, streaks, fine dots, and the lamps that it mirrors. */
import { text } from './stroke-font.js';
import { fixed, gradient, mix, smoothClosed } from './svg.js';

/** @typedef {ReturnType<typeof import('./random.js').randomStream>} RandomStream */
/** @typedef {[x: number, y: number, z: number]} Vector  x right, y down, z toward the camera, on a ball of radius 1 */

/** An apple where it lies.
 * @typedef {object} Apple
 * @property {number} x        middle, in pixels
 * @property {number} y
 * @property {number} radius   in pixels
 * @property {Skin} skin
 * @property {boolean} sticker
 * @property {number} number   printed on the sticker
 */

/** Colours of a kind of apple.
 * @typedef {object} Skin
 * @property {string} ground    where the sun did not reach
 * @property {string} blush     where it did
 * @property {string} streak
 * @property {string} dot
 * @property {number} blushing  how strong the blush is, 0..1
 * @property {number} streaks   how many
 */

/** @type {readonly Skin[]} */
export const SKINS = [
  { ground: '#d8a83c', blush: '#a5172a', streak: '#7c0d1d', dot: '#f0d9a0', blushing: 0.96, streaks: 70 },
  { ground: '#c9452f', blush: '#8a1024', streak: '#5e0a19', dot: '#eec9a4', blushing: 0.95, streaks: 50 },
  { ground: '#e5c653', blush: '#dc7f38', streak: '#c8572c', dot: '#8d7a31', blushing: 0.6, streaks: 26 },
  { ground: '#9fbb45', blush: '#b9b548', streak: '#7f9c37', dot: '#dbe6ae', blushing: 0.4, streaks: 14 },
  { ground: '#e9cf7a', blush: '#d5455a', streak: '#b32741', dot: '#f7e8c2', blushing: 0.85, streaks: 60 },
];

/** Where the lamps stand: a bar of lights up left of the camera, mirrored in each apple as a row of bright points. */
const LAMP = /** @type {Vector} */ ([-0.36, -0.44, Math.sqrt(1 - 0.36 ** 2 - 0.44 ** 2)]);
const LAMPS_IN_BAR = 6;

/** The apple with its shadow on the belt.
 *
 * @param {Apple} apple @param {RandomStream} random @param {string} id  unlike any other in the drawing
 * @returns {{ shadow: string, body: string, outline: [number, number][], stem: [number, number] | undefined }}
 *   `stem` is where the stem meets the apple, undefined when the apple lies on it
 */
export function drawApple(apple, random, id) {
  const { x, y, radius, skin } = apple;
  const lean = random.between(0.12, 0.9); // how far the stem end leans away from the camera, in radians
  const bearing = random.between(0, 2 * Math.PI);
  const stemUp = random.between(0, 1) < 0.8;
  const pole = /** @type {Vector} */ ([
    Math.sin(lean) * Math.cos(bearing),
    Math.sin(lean) * Math.sin(bearing),
    Math.cos(lean),
  ]);
  const outline = outlineOf(apple, random);
  const shape = smoothClosed(outline);
  const hollow = { x: x + 0.86 * radius * pole[0], y: y + 0.86 * radius * pole[1] };

  const body = [
    gradient(`${id}g`, x - 0.3 * radius, y - 0.34 * radius, 1.42 * radius, [
      [0, mix(skin.ground, '#ffffff', 0.3), 1],
      [0.45, skin.ground, 1],
      [1, mix(skin.ground, '#20140c', 0.6), 1],
    ]),
    `<path d="${shape}" fill="url(#${id}g)"/>`,
    blush(apple, random, id, shape),
    streaks(apple, pole, random),
    dots(apple, random),
    rim(apple, id, shape),
    end(apple, pole, hollow, stemUp, id),
    stemUp ? stem(apple, pole, hollow, random) : calyx(apple, pole, hollow, random),
    apple.sticker ? sticker(apple, pole, random) : '',
    gloss(apple, id),
  ].join('');
  return {
    shadow: shadow(apple, id),
    body,
    outline,
    stem: stemUp ? [hollow.x, hollow.y] : undefined,
  };
}

/** A round with a few gentle bulges. @param {Apple} apple @param {RandomStream} random @returns {[number, number][]} */
function outlineOf({ x, y, radius }, random) {
  const bulges = [2, 3, 5].map((order) => ({
    order,
    height: random.between(0.2, 1) * (order === 2 ? 0.02 : 0.007),
    turn: random.between(0, 2 * Math.PI),
  }));
  return Array.from({ length: 36 }, (_, index) => {
    const angle = (2 * Math.PI * index) / 36;
    let stretch = 1;
    for (const { order, height, turn } of bulges) stretch += height * Math.cos(order * angle + turn);
    return [x + radius * stretch * Math.cos(angle), y + radius * stretch * Math.sin(angle)];
  });
}

/** The side that the sun reached. @param {Apple} apple @param {RandomStream} random @param {string} id @param {string} shape */
function blush({ x, y, radius, skin }, random, id, shape) {
  const bearing = random.between(0, 2 * Math.PI);
  const away = random.between(0.1, 0.4) * radius;
  const [cx, cy] = [x + away * Math.cos(bearing), y + away * Math.sin(bearing)];
  const rich = mix(skin.blush, '#ffffff', 0.06);
  const shade = gradient(`${id}b`, cx, cy, random.between(1.05, 1.4) * radius, [
    [0, rich, skin.blushing],
    [0.5, skin.blush, 0.92 * skin.blushing],
    [0.8, skin.blush, 0.5 * skin.blushing],
    [1, skin.blush, 0],
  ]);
  return `${shade}<path d="${shape}" fill="url(#${id}b)"/>`;
}

/** Streaks along the meridians from stem to calyx. @param {Apple} apple @param {Vector} pole @param {RandomStream} random */
function streaks(apple, pole, random) {
  let strips = '';
  for (let count = 0; count < apple.skin.streaks; count++) {
    const turn = random.between(0, 2 * Math.PI);
    const from = random.between(0.35, 0.9);
    const to = from + random.between(0.35, 1.1);
    const half = random.between(0.006, 0.028);
    const strip = meridianStrip(apple, pole, turn, from, to, half);
    const opacity = random.between(0.12, 0.42).toFixed(2);
    if (strip !== '') strips += `<path d="${strip}" fill-opacity="${opacity}"/>`;
  }
  return `<g fill="${apple.skin.streak}">${strips}</g>`;
}

/** A strip that tapers to both ends, as far as the camera sees it.
 * @param {Apple} apple @param {Vector} pole @param {number} turn  which meridian
 * @param {number} from @param {number} to  polar angles  @param {number} half  half the width in the middle, in radians */
function meridianStrip(apple, pole, turn, from, to, half) {
  const STEPS = 8;
  /** @type {string[]} */
  const left = [];
  /** @type {string[]} */
  const right = [];
  for (let step = 0; step <= STEPS; step++) {
    const polar = from + ((to - from) * step) / STEPS;
    const wide = (half * Math.sin((Math.PI * step) / STEPS)) / Math.max(Math.sin(polar), 0.3);
    const a = onBall(pole, polar, turn - wide);
    const b = onBall(pole, polar, turn + wide);
    if (a[2] < 0.08 || b[2] < 0.08) break;
    left.push(spot(apple, a));
    right.unshift(spot(apple, b));
  }
  return left.length < 3 ? '' : `M${[...left, ...right].join('L')}Z`;
}

/** Fine dots of the skin, foreshortened toward the rim. @param {Apple} apple @param {RandomStream} random */
function dots(apple, random) {
  const { x, y, radius, skin } = apple;
  let spots = '';
  for (let count = 0; count < 110; count++) {
    const angle = random.between(0, 2 * Math.PI);
    const away = Math.sqrt(random.between(0, 0.9));
    const size = random.between(0.006, 0.014) * radius;
    const flat = Math.sqrt(1 - away * away) * size;
    const place = `translate(${fixed(x + away * radius * Math.cos(angle))} ${fixed(y + away * radius * Math.sin(angle))})`;
    const turn = `rotate(${fixed((angle * 180) / Math.PI)})`;
    const opacity = random.between(0.25, 0.75).toFixed(2);
    spots += `<ellipse transform="${place} ${turn}" rx="${fixed(flat)}" ry="${fixed(size)}" fill-opacity="${opacity}"/>`;
  }
  return `<g fill="${skin.dot}">${spots}</g>`;
}

/** The rim turns away from the lamps; below right the belt shines back a little.
 * @param {Apple} apple @param {string} id @param {string} shape */
function rim({ x, y, radius }, id, shape) {
  return (
    gradient(`${id}r`, x - 0.13 * radius, y - 0.16 * radius, 1.2 * radius, [
      [0, '#1c0a08', 0],
      [0.58, '#1c0a08', 0.03],
      [0.82, '#1c0a08', 0.3],
      [0.96, '#140806', 0.68],
      [1, '#140806', 0.72],
    ]) +
    `<path d="${shape}" fill="url(#${id}r)"/>` +
    gradient(`${id}k`, x - 0.16 * radius, y - 0.18 * radius, 1.26 * radius, [
      [0.88, '#6fb0b8', 0],
      [0.95, '#6fb0b8', 0.24],
      [1, '#6fb0b8', 0.1],
    ]) +
    `<path d="${shape}" fill="url(#${id}k)"/>`
  );
}

/** The hollow at the stem, or the eye at the other end.
 * @param {Apple} apple @param {Vector} pole @param {{ x: number, y: number }} hollow @param {boolean} stemUp @param {string} id */
function end({ radius, skin }, pole, hollow, stemUp, id) {
  const wide = (stemUp ? 0.4 : 0.25) * radius;
  const deep = mix(mix(skin.ground, '#5b4a1e', 0.55), '#160d05', 0.55);
  const bearing = (Math.atan2(pole[1], pole[0]) * 180) / Math.PI;
  const place = `translate(${fixed(hollow.x)} ${fixed(hollow.y)}) rotate(${fixed(bearing)}) scale(${fixed(Math.max(pole[2], 0.4))} 1)`;
  const shade = gradient(`${id}h`, 0, 0, wide, [
    [0, deep, 0.96],
    [0.3, mix(deep, skin.ground, 0.25), 0.8],
    [0.62, mix(skin.ground, '#6d7a2c', 0.35), 0.42],
    [1, skin.ground, 0],
  ]);
  return `${shade}<circle transform="${place}" r="${fixed(wide)}" fill="url(#${id}h)"/>`;
}

/** @param {Apple} apple @param {Vector} pole @param {{ x: number, y: number }} hollow @param {RandomStream} random */
function stem({ radius }, pole, hollow, random) {
  const reach = random.between(0.2, 0.36) * radius;
  const bend = random.between(-0.5, 0.5);
  const along = Math.atan2(pole[1], pole[0]);
  const [tipX, tipY] = [
    hollow.x + reach * (0.35 + pole[0]) * Math.cos(bend) - reach * Math.sin(along) * bend,
    hollow.y + reach * (0.35 + pole[1]) * Math.cos(bend) + reach * Math.cos(along) * bend,
  ];
  const [midX, midY] = [
    (hollow.x + tipX) / 2 + 0.25 * reach * bend,
    (hollow.y + tipY) / 2 - 0.25 * reach * Math.abs(bend),
  ];
  const curve = (/** @type {number} */ dx, /** @type {number} */ dy) =>
    `M${fixed(hollow.x + dx)} ${fixed(hollow.y + dy)}Q${fixed(midX + dx)} ${fixed(midY + dy)} ${fixed(tipX + dx)} ${fixed(tipY + dy)}`;
  const wide = 0.055 * radius;
  return (
    `<g fill="none" stroke-linecap="round">` +
    `<path d="${curve(0.06 * radius, 0.08 * radius)}" stroke="#120803" stroke-width="${fixed(1.5 * wide)}" stroke-opacity="0.4"/>` +
    `<path d="${curve(0, 0)}" stroke="#3d2512" stroke-width="${fixed(wide)}"/>` +
    `<path d="${curve(-0.25 * wide, -0.25 * wide)}" stroke="#8f6a3c" stroke-width="${fixed(0.38 * wide)}"/>` +
    `<circle cx="${fixed(tipX)}" cy="${fixed(tipY)}" r="${fixed(0.72 * wide)}" fill="#5a3b1f"/>` +
    `</g>`
  );
}

/** The dried flower at the end without a stem. @param {Apple} apple @param {Vector} pole @param {{ x: number, y: number }} hollow @param {RandomStream} random */
function calyx({ radius }, pole, hollow, random) {
  let tips = '';
  const turn = random.between(0, 72);
  for (let tip = 0; tip < 5; tip++) {
    const reach = fixed(random.between(0.1, 0.14) * radius);
    const half = fixed(0.028 * radius);
    tips += `<path transform="rotate(${fixed(turn + 72 * tip)})" d="M0 -${half}L${reach} 0L0 ${half}Z"/>`;
  }
  const place = `translate(${fixed(hollow.x)} ${fixed(hollow.y)}) scale(${fixed(0.5 + 0.5 * pole[2])})`;
  return `<g transform="${place}" fill="#3b2a16" stroke="#1b1108" stroke-width="0.6">${tips}<circle r="${fixed(0.03 * radius)}"/></g>`;
}

/** A paper sticker with the number of its line. @param {Apple} apple @param {Vector} pole @param {RandomStream} random */
function sticker({ x, y, radius, number }, pole, random) {
  const away = 0.42 * radius; // on the far side of the middle from the stem end
  const length = Math.hypot(pole[0], pole[1]);
  const [cx, cy] = [x - (away * pole[0]) / length, y - (away * pole[1]) / length];
  const turn = random.between(-40, 40);
  const colour = random.pick(['#17603f', '#1f4f8a', '#a33a12']);
  const tall = 0.165 * radius;
  const cap = 0.125 * radius;
  return (
    `<g transform="translate(${fixed(cx)} ${fixed(cy)}) rotate(${fixed(turn)})">` +
    `<ellipse rx="${fixed(1.55 * tall + 1)}" ry="${fixed(tall + 1)}" cx="1.4" cy="1.8" fill="#200b06" fill-opacity="0.35"/>` +
    `<ellipse rx="${fixed(1.55 * tall)}" ry="${fixed(tall)}" fill="#f3efe2"/>` +
    `<ellipse rx="${fixed(1.4 * tall)}" ry="${fixed(0.84 * tall)}" fill="none" stroke="${colour}" stroke-width="${fixed(0.1 * tall)}"/>` +
    text(number.toString(), {
      x: 0,
      y: cap / 2,
      capHeight: cap,
      weight: 0.17,
      ink: colour,
      anchor: 'middle',
    }) +
    `</g>`
  );
}

/** What the skin mirrors: a soft glow and the points of the lamp bar. @param {Apple} apple @param {string} id */
function gloss({ x, y, radius }, id) {
  const [cx, cy] = [x + radius * LAMP[0], y + radius * LAMP[1]];
  const along = Math.atan2(LAMP[1], LAMP[0]) + Math.PI / 2;
  let points = '';
  for (let lamp = 0; lamp < LAMPS_IN_BAR; lamp++) {
    const offset = (lamp - (LAMPS_IN_BAR - 1) / 2) * 0.075 * radius;
    const sag = 0.6 * (offset / radius) ** 2 * radius; // a straight bar is mirrored bent
    const px = cx + offset * Math.cos(along) + sag * -LAMP[0];
    const py = cy + offset * Math.sin(along) + sag * -LAMP[1];
    points += `<circle cx="${fixed(px)}" cy="${fixed(py)}" r="${fixed(0.018 * radius)}"/>`;
  }
  const place = `translate(${fixed(cx)} ${fixed(cy)}) rotate(${fixed((along * 180) / Math.PI)}) scale(1 0.52)`;
  return (
    gradient(`${id}s`, 0, 0, 0.46 * radius, [
      [0, '#fff8ee', 0.62],
      [0.35, '#fff8ee', 0.34],
      [0.75, '#fff8ee', 0.07],
      [1, '#fff8ee', 0],
    ]) +
    `<circle transform="${place}" r="${fixed(0.46 * radius)}" fill="url(#${id}s)"/>` +
    `<g fill="#ffffff">${points}</g>`
  );
}

/** @param {Apple} apple @param {string} id */
function shadow({ x, y, radius }, id) {
  const [cx, cy] = [x + 0.17 * radius, y + 0.21 * radius];
  const shade = gradient(`${id}d`, cx, cy, 1.22 * radius, [
    [0.6, '#040b0d', 0.82],
    [0.8, '#040b0d', 0.55],
    [0.92, '#040b0d', 0.18],
    [1, '#040b0d', 0],
  ]);
  return `${shade}<circle cx="${fixed(cx)}" cy="${fixed(cy)}" r="${fixed(1.22 * radius)}" fill="url(#${id}d)"/>`;
}

/** A point of the ball at a polar angle from `pole`, on one of its meridians.
 * @param {Vector} pole @param {number} polar @param {number} turn @returns {Vector} */
function onBall(pole, polar, turn) {
  const flat = Math.hypot(pole[0], pole[1]);
  const u = [(pole[0] * pole[2]) / flat, (pole[1] * pole[2]) / flat, -flat];
  const v = [-pole[1] / flat, pole[0] / flat, 0];
  const [c, s] = [Math.cos(polar), Math.sin(polar)];
  const [cu, su] = [Math.cos(turn), Math.sin(turn)];
  const along = (/** @type {0 | 1 | 2} */ axis) => pole[axis] * c + (u[axis] * cu + v[axis] * su) * s;
  return [along(0), along(1), along(2)];
}

/** @param {Apple} apple @param {Vector} point */
function spot({ x, y, radius }, point) {
  return `${fixed(x + 0.985 * radius * point[0])} ${fixed(y + 0.985 * radius * point[1])}`;
}
