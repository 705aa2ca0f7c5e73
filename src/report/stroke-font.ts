/** Lettering drawn as strokes with round ends, so that no picture depends on the fonts of the machine that draws it.
 *
 * The letters are drawn on a body of 100 units from the top of a capital (y = 0) to the base line (y = 100); each has its own width.
 */

/** Space between letters and the width of a blank, in the same units. */
const LETTER_GAP = 30;
const BLANK = 44;

/** Width and strokes of each letter. */
const LETTERS: Readonly<Record<string, readonly [width: number, strokes: string]>> = {
  A: [64, 'M0 100 L32 0 L64 100 M11 67 H53'],
  B: [56, 'M0 0 V100 H30 A26 26 0 0 0 30 48 H0 M30 48 A24 24 0 0 0 30 0 H0'],
  C: [58, 'M58 29 A29 29 0 0 0 0 29 V71 A29 29 0 0 0 58 71'],
  D: [58, 'M0 0 V100 H26 A32 32 0 0 0 58 68 V32 A32 32 0 0 0 26 0 Z'],
  E: [50, 'M50 0 H0 V100 H50 M0 48 H42'],
  F: [50, 'M50 0 H0 V100 M0 48 H42'],
  G: [58, 'M58 27 A29 27 0 0 0 0 29 V71 A29 29 0 0 0 58 71 V53 H33'],
  H: [58, 'M0 0 V100 M58 0 V100 M0 48 H58'],
  I: [0, 'M0 0 V100'],
  J: [44, 'M44 0 V78 A22 22 0 0 1 0 78'],
  K: [58, 'M0 0 V100 M56 0 L0 62 M20 40 L58 100'],
  L: [48, 'M0 0 V100 H48'],
  M: [72, 'M0 100 V0 L36 62 L72 0 V100'],
  N: [60, 'M0 100 V0 L60 100 V0'],
  O: [60, 'M0 30 A30 30 0 0 1 60 30 V70 A30 30 0 0 1 0 70 Z'],
  P: [57, 'M0 100 V0 H30 A27 27 0 0 1 30 54 H0'],
  Q: [62, 'M0 30 A30 30 0 0 1 60 30 V70 A30 30 0 0 1 0 70 Z M38 76 L62 102'],
  R: [58, 'M0 100 V0 H30 A26 26 0 0 1 30 52 H0 M28 52 L58 100'],
  S: [
    56,
    'M54 26 A26 26 0 0 0 28 0 H26 A24.5 24.5 0 0 0 26 49 H30 A25.5 25.5 0 0 1 30 100 H28 A27 27 0 0 1 1 73',
  ],
  T: [56, 'M0 0 H56 M28 0 V100'],
  U: [60, 'M0 0 V70 A30 30 0 0 0 60 70 V0'],
  V: [62, 'M0 0 L31 100 L62 0'],
  W: [92, 'M0 0 L23 100 L46 8 L69 100 L92 0'],
  X: [60, 'M0 0 L60 100 M60 0 L0 100'],
  Y: [60, 'M0 0 L30 52 L60 0 M30 52 V100'],
  Z: [54, 'M0 0 H54 L0 100 H54'],
  0: [56, 'M0 28 A28 28 0 0 1 56 28 V72 A28 28 0 0 1 0 72 Z'],
  1: [56, 'M8 22 L32 0 V100'],
  2: [56, 'M1 28 A27 28 0 0 1 55 28 C55 42 48 50 40 58 L1 100 H56'],
  3: [56, 'M3 26 A25 26 0 0 1 28 0 A24 24 0 0 1 28 48 H20 M28 48 A26 26 0 0 1 28 100 A27 26 0 0 1 1 74'],
  4: [56, 'M42 100 V0 L0 72 H56'],
  5: [56, 'M51 0 H8 L4 47 C10 40 18 36 27 36 A28 32 0 0 1 27 100 A27 26 0 0 1 0 76'],
  6: [56, 'M44 0 C20 16 0 42 0 70 A28 30 0 0 0 56 70 A28 30 0 0 0 0 70'],
  7: [56, 'M0 0 H56 L20 100'],
  8: [56, 'M28 48 A24 24 0 1 1 28 0 A24 24 0 1 1 28 48 A27 26 0 1 0 28 100 A27 26 0 1 0 28 48'],
  9: [56, 'M12 100 C36 84 56 58 56 30 A28 30 0 0 0 0 30 A28 30 0 0 0 56 30'],
  '.': [0, 'M0 100 h0.01'],
  ',': [8, 'M8 100 L2 116'],
  ':': [0, 'M0 42 h0.01 M0 98 h0.01'],
  '-': [36, 'M0 54 H36'],
  '+': [48, 'M0 54 H48 M24 30 V78'],
  '/': [40, 'M0 106 L40 -6'],
  '=': [48, 'M0 42 H48 M0 68 H48'],
  '(': [18, 'M18 -8 A76 76 0 0 0 18 116'],
  ')': [18, 'M0 -8 A76 76 0 0 1 0 116'],
  '%': [
    72,
    'M64 0 L8 100 M0 20 A14 18 0 1 1 28 20 A14 18 0 1 1 0 20 M44 80 A14 18 0 1 1 72 80 A14 18 0 1 1 44 80',
  ],
  _: [56, 'M0 114 H56'],
  "'": [0, 'M0 0 V20'],
  ';': [8, 'M8 42 h0.01 M8 100 L2 116'],
  '?': [48, 'M0 26 A24 25 0 1 1 36 46 C28 52 24 58 24 70 M24 99 h0.01'],
  a: [48, 'M48 34 V100 M48 58 A24 24 0 0 0 0 58 V76 A24 24 0 0 0 48 76'],
  b: [48, 'M0 0 V100 M0 58 A24 24 0 0 1 48 58 V76 A24 24 0 0 1 0 76'],
  c: [44, 'M44 50 A23 23 0 0 0 0 58 V76 A23 23 0 0 0 44 84'],
  d: [48, 'M48 0 V100 M48 58 A24 24 0 0 0 0 58 V76 A24 24 0 0 0 48 76'],
  e: [48, 'M0 67 H48 V58 A24 24 0 0 0 0 58 V76 A24 24 0 0 0 44 88'],
  f: [32, 'M32 2 A18 18 0 0 0 12 20 V100 M0 38 H28'],
  g: [48, 'M48 34 V104 A24 22 0 0 1 4 114 M48 58 A24 24 0 0 0 0 58 V74 A24 24 0 0 0 48 74'],
  h: [44, 'M0 0 V100 M0 56 A22 22 0 0 1 44 56 V100'],
  i: [0, 'M0 36 V100 M0 8 h0.01'],
  j: [14, 'M14 36 V108 A17 17 0 0 1 0 124 M14 8 h0.01'],
  k: [42, 'M0 0 V100 M40 34 L0 74 M15 60 L42 100'],
  l: [12, 'M0 0 V86 A14 14 0 0 0 12 100'],
  m: [80, 'M0 100 V34 M0 56 A20 22 0 0 1 40 56 V100 M40 56 A20 22 0 0 1 80 56 V100'],
  n: [44, 'M0 100 V34 M0 56 A22 22 0 0 1 44 56 V100'],
  o: [50, 'M0 59 A25 25 0 0 1 50 59 V75 A25 25 0 0 1 0 75 Z'],
  p: [48, 'M0 34 V126 M0 58 A24 24 0 0 1 48 58 V76 A24 24 0 0 1 0 76'],
  q: [48, 'M48 34 V126 M48 58 A24 24 0 0 0 0 58 V76 A24 24 0 0 0 48 76'],
  r: [28, 'M0 100 V34 M0 58 A24 24 0 0 1 28 36'],
  s: [
    40,
    'M39 46 C36 38 28 34 20 34 C8 34 2 42 2 50 C2 60 10 64 20 67 C32 70 40 74 40 84 C40 94 32 100 20 100 C10 100 2 95 0 87',
  ],
  t: [30, 'M12 8 V82 A18 18 0 0 0 30 99 M0 36 H28'],
  u: [44, 'M0 34 V78 A22 22 0 0 0 44 78 M44 34 V100'],
  v: [46, 'M0 34 L23 100 L46 34'],
  w: [70, 'M0 34 L17 100 L35 40 L53 100 L70 34'],
  x: [44, 'M0 34 L44 100 M44 34 L0 100'],
  y: [46, 'M0 34 L23 98 M46 34 L19 112 A17 17 0 0 1 2 124'],
  z: [42, 'M0 36 H42 L0 100 H42'],
  µ: [44, 'M0 34 V126 M0 78 A22 22 0 0 0 44 78 M44 34 V100'],
};

/** What stands in for letters that are not drawn here. */
const UNKNOWN = '?';

/** A text with every letter that the font lacks replaced by a question mark: names from files may hold any. */
export function inStrokes(text: string): string {
  return [...text].map((letter) => (letter === ' ' || letter in LETTERS ? letter : UNKNOWN)).join('');
}

/** Width of a line of text from the middle of its first stroke to the middle of its last.
 * @param capHeight  height of a capital, between the middles of its strokes
 * @returns in the unit of `capHeight`
 * @throws {RangeError} for a letter that the font lacks
 */
export function textWidth(text: string, capHeight: number): number {
  let width = 0;
  for (const letter of text) width += advanceOf(letter);
  return ((width - LETTER_GAP) * capHeight) / 100;
}

export interface StrokePlace {
  /** Where the line begins, has its middle or ends. */
  x: number;
  /** The base line. */
  y: number;
  capHeight: number;
  /** Width of the stroke as a share of the height of a capital. Default: 0.14. */
  weight?: number;
  /** Colour of the strokes. Default: black. */
  ink?: string;
  /** Default: `start`. */
  anchor?: 'start' | 'middle' | 'end';
}

/** A line of text as an SVG element.
 * @throws {RangeError} for a letter that the font lacks
 */
export function text(
  text: string,
  { x, y, capHeight, weight = 0.14, ink = '#000', anchor = 'start' }: StrokePlace,
): string {
  const width = textWidth(text, capHeight);
  const left = anchor === 'start' ? x : anchor === 'middle' ? x - width / 2 : x - width;
  const scale = capHeight / 100;
  let pen = 0;
  let letters = '';
  for (const letter of text) {
    if (letter !== ' ') letters += `<path transform="translate(${pen} 0)" d="${letterOf(letter)[1]}"/>`;
    pen += advanceOf(letter);
  }
  const place = `translate(${round(left)} ${round(y - capHeight)}) scale(${round(scale)})`;
  return (
    `<g transform="${place}" fill="none" stroke="${ink}" stroke-width="${round(100 * weight)}" ` +
    `stroke-linecap="round" stroke-linejoin="round">${letters}</g>`
  );
}

function advanceOf(letter: string): number {
  return letter === ' ' ? BLANK : letterOf(letter)[0] + LETTER_GAP;
}

function letterOf(letter: string): readonly [width: number, strokes: string] {
  const found = LETTERS[letter];
  if (found === undefined) throw new RangeError(`the stroke font has no letter '${letter}'`);
  return found;
}

function round(value: number): number {
  return Number(value.toFixed(4));
}
