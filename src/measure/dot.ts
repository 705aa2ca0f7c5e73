/** The centroid of a dark disc on a bright ground. */
import { InputError } from '../errors.js';
import { solveLinear } from '../numeric/solve-linear.js';
import type { Plane } from './plane.js';

export interface DotGuess {
  x: number;
  y: number;
  radiusPx: number;
  /** Everything within this distance belongs to the disc or to its ground. */
  roomPx: number;
}

/** What a disc must be, to be measured. */
export const DOT_LIMITS = {
  /** Ground around the disc, for its light to be known. */
  groundPx: 4,
  /** Area of the dark over that of the disc. */
  areaShare: 0.5,
  /** How much darker than the ground, as a share of the ground's light. */
  darkness: 0.1,
  clippedShare: 0.01,
  /** Darkness over the noise of a pixel of the ground. */
  darknessOverNoise: 5,
} as const;

/** The outer part of the room is taken for ground. */
const GROUND_SHARE = 0.75;
/** Blur reaches no farther from the disc than this; each pixel more would add noise and no light of the disc.
 */
const BLUR_PX = 10;
/** Width of the circle's soft rim: pixels come in and go out by degrees as the circle moves, so that it comes
 * to rest. */
const RIM_PX = 2;
const MOST_STEPS = 30;
const LEAST_STEP_PX = 1e-3;

/** The centroid of the darkness, 1 - light / ground, over a circle around the disc; the ground is a plane
 * through the ring around it, so that light that falls off across the disc does not move the result. The
 * circle follows the centroid.
 * @throws {InputError} no disc there, cut by the frame, clipped, too faint, too noisy: with the limit and
 *   the value
 */
export function measureDot(plane: Plane, guess: DotGuess): [x: number, y: number] {
  const { radiusPx, roomPx } = guess;
  const innerPx = Math.min(Math.max(radiusPx + 1, GROUND_SHARE * roomPx), radiusPx + BLUR_PX);
  if (roomPx - radiusPx < DOT_LIMITS.groundPx)
    throw new InputError({
      message: 'the disc has too little ground around it',
      found: `${(roomPx - radiusPx).toFixed(1)} px`,
      allowed: `from ${DOT_LIMITS.groundPx} px up`,
    });
  let { x, y } = guess;
  for (let step = 0; ; step++) {
    refuseCut(plane, x, y, roomPx);
    const ground = fitGround(plane, x, y, innerPx, roomPx);
    const dark = darkness(plane, ground, x, y, innerPx);
    refuseUnlikely(plane, dark, ground, guess, x, y);
    const moved = Math.hypot(dark.x - x, dark.y - y);
    [x, y] = [dark.x, dark.y];
    if (moved < LEAST_STEP_PX) return [x, y];
    if (step === MOST_STEPS)
      throw new InputError({
        message: 'shows no disc',
        found: `a centroid that still moves by ${moved.toPrecision(2)} px after ${MOST_STEPS} steps`,
        allowed: `less than ${LEAST_STEP_PX} px`,
      });
  }
}

/** Light of the ground, base + slopeX (x - x0) + slopeY (y - y0) around (x0, y0), and how far its pixels
 * stray from that. */
interface Ground {
  base: number;
  slopeX: number;
  slopeY: number;
  noise: number;
}

function fitGround(plane: Plane, x0: number, y0: number, innerPx: number, outerPx: number): Ground {
  const matrix = Array.from({ length: 3 }, () => new Float64Array(3));
  const right = new Float64Array(3);
  let squares = 0;
  let count = 0;
  forCircle(plane, x0, y0, outerPx, (dx, dy, value) => {
    if (Math.hypot(dx, dy) < innerPx) return;
    const terms = [1, dx, dy];
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) matrix[i][j] += terms[i] * terms[j];
      right[i] += terms[i] * value;
    }
    squares += value * value;
    count++;
  });
  const sums = Float64Array.from(right);
  const [base, slopeX, slopeY] = solveLinear(matrix, right);
  const left = squares - base * sums[0] - slopeX * sums[1] - slopeY * sums[2];
  return { base, slopeX, slopeY, noise: Math.sqrt(Math.max(0, left) / Math.max(1, count - 3)) };
}

function darkness(
  plane: Plane,
  { base, slopeX, slopeY }: Ground,
  x0: number,
  y0: number,
  radiusPx: number,
): { area: number; most: number; x: number; y: number } {
  let area = 0;
  let most = 0;
  let momentX = 0;
  let momentY = 0;
  forCircle(plane, x0, y0, radiusPx, (dx, dy, value) => {
    const dark = 1 - value / (base + slopeX * dx + slopeY * dy);
    const weighted = dark * Math.min(1, (radiusPx - Math.hypot(dx, dy)) / RIM_PX);
    area += weighted;
    most = Math.max(most, dark);
    momentX += weighted * dx;
    momentY += weighted * dy;
  });
  return { area, most, x: x0 + momentX / area, y: y0 + momentY / area };
}

function forCircle(
  { width, height, samples }: Plane,
  x0: number,
  y0: number,
  radiusPx: number,
  look: (dx: number, dy: number, value: number) => void,
): void {
  const top = Math.max(0, Math.ceil(y0 - radiusPx));
  const bottom = Math.min(height - 1, Math.floor(y0 + radiusPx));
  for (let row = top; row <= bottom; row++) {
    const half = Math.sqrt(radiusPx * radiusPx - (row - y0) ** 2);
    const left = Math.max(0, Math.ceil(x0 - half));
    const right = Math.min(width - 1, Math.floor(x0 + half));
    for (let column = left; column <= right; column++)
      look(column - x0, row - y0, samples[row * width + column]);
  }
}

function refuseCut({ width, height }: Plane, x: number, y: number, roomPx: number): void {
  const room = Math.min(x, y, width - 1 - x, height - 1 - y) + 0.5;
  if (room >= roomPx) return;
  throw new InputError({
    message: 'the disc or its ground is cut by the frame',
    found: `${room.toFixed(1)} px to the frame from its middle`,
    allowed: `from ${roomPx.toFixed(1)} px up`,
  });
}

function refuseUnlikely(
  plane: Plane,
  { area, most }: { area: number; most: number },
  ground: Ground,
  { radiusPx, roomPx }: DotGuess,
  x: number,
  y: number,
): void {
  let clipped = 0;
  let count = 0;
  forCircle(plane, x, y, roomPx, (_dx, _dy, value) => {
    if (value === 0 || value === 1) clipped++;
    count++;
  });
  if (clipped / count > DOT_LIMITS.clippedShare)
    throw new InputError({
      message: 'the disc or its ground is clipped at black or white',
      found: `${((100 * clipped) / count).toFixed(1)} % of the pixels`,
      allowed: `up to ${100 * DOT_LIMITS.clippedShare} %`,
      advice: 'Expose so that neither reaches the end of the scale.',
    });
  if (!(most >= DOT_LIMITS.darkness))
    throw new InputError({
      message: 'shows no disc',
      found: `at most ${(100 * most).toFixed(1)} % darker than the ground`,
      allowed: `from ${100 * DOT_LIMITS.darkness} % up`,
    });
  const overNoise = (most * ground.base) / ground.noise;
  if (overNoise < DOT_LIMITS.darknessOverNoise)
    throw new InputError({
      message: 'the disc is too noisy',
      found: `a darkness of ${overNoise.toFixed(1)} times the noise`,
      allowed: `from ${DOT_LIMITS.darknessOverNoise} times up`,
    });
  // a disc of darkness `most` at its middle, or less where the blur is wider than the disc
  const share = area / (most * Math.PI * radiusPx * radiusPx);
  if (share < DOT_LIMITS.areaShare)
    throw new InputError({
      message: 'shows no whole disc',
      found: `a dark area of ${share.toFixed(2)} times that of the disc`,
      allowed: `from ${DOT_LIMITS.areaShare} times up`,
    });
}
