/** The pixels of a kernel from the fine samples of an intensity: a separable filter, down first, then along. */
import { add, mul, splat } from './vector';

/** Add to `sum` the pixels of one PSF.
 *
 *   sum[r][c] += scale * sum over i, j of taps[i] taps[j] intensity[r perPixel + i][c perPixel + j]
 *
 * @param intensity float32[side][side]
 * @param taps float32[tapCount], `tapCount` a multiple of 4 (filled up with 0)
 * @param pixels pixels on each side of the kernel; (pixels - 1) perPixel + tapCount may not exceed side
 * @param lines float32[side] of work space
 * @param sum float32[pixels][pixels]
 */
export function addPixels(
  intensity: usize, side: u32, taps: usize, tapCount: u32, perPixel: u32, pixels: u32, scale: f32, lines: usize, sum: usize,
): void {
  const stride = <usize>side << 2;
  for (let row: u32 = 0; row < pixels; row++) {
    filterDown(intensity + <usize>(row * perPixel) * stride, stride, taps, tapCount, lines);
    for (let column: u32 = 0; column < pixels; column++, sum += 4) {
      store<f32>(sum, load<f32>(sum) + scale * dot(lines + (<usize>(column * perPixel) << 2), taps, tapCount));
    }
  }
}

/** out[x] = sum over i of taps[i] rows[i][x] */
@inline
function filterDown(rows: usize, stride: usize, taps: usize, tapCount: u32, out: usize): void {
  for (let x: usize = 0; x < stride; x += 16) {
    let value = f32x4.splat(0);
    let at = rows + x;
    for (let i: u32 = 0; i < tapCount; i++, at += stride) value = add(value, mul(splat(taps + (<usize>i << 2)), v128.load(at)));
    v128.store(out + x, value);
  }
}

/** sum over i of taps[i] samples[i] */
@inline
function dot(samples: usize, taps: usize, tapCount: u32): f32 {
  let value = f32x4.splat(0);
  for (let i: usize = 0; i < <usize>tapCount << 2; i += 16) value = add(value, mul(v128.load(taps + i), v128.load(samples + i)));
  const halves = add(value, v128.shuffle<f32>(value, value, 2, 3, 0, 1));
  return f32x4.extract_lane(halves, 0) + f32x4.extract_lane(halves, 1);
}
