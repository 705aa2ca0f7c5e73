/** The last step of the blur: a picture over what a scene of ones became. */
import { add, reverseLanes } from './vector';

/** out[x] /= flat[x] for one row. */
export function divideRow(out: usize, flat: usize, width: i32): void {
  let x = 0;
  for (; x + 4 <= width; x += 4) {
    const at = <usize>x << 2;
    v128.store(out + at, f32x4.div(v128.load(out + at), v128.load(flat + at)));
  }
  for (; x < width; x++) {
    const at = <usize>x << 2;
    store<f32>(out + at, load<f32>(out + at) / load<f32>(flat + at));
  }
}

/** The same where a row of ones was blurred from the left half only, and the row that mirrors it from the upper half only:
 * out[x] /= flat[x] + flat[width - 1 - x] + opposite[x] + opposite[width - 1 - x]. */
export function divideMirroredRow(out: usize, flat: usize, opposite: usize, width: i32): void {
  let x = 0;
  for (; x + 4 <= width; x += 4) {
    const at = <usize>x << 2;
    const mirrored = <usize>(width - 4 - x) << 2;
    const along = add(v128.load(flat + at), v128.load(opposite + at));
    const back = add(v128.load(flat + mirrored), v128.load(opposite + mirrored));
    v128.store(out + at, f32x4.div(v128.load(out + at), add(along, reverseLanes(back))));
  }
  for (; x < width; x++) {
    const at = <usize>x << 2;
    const mirrored = <usize>(width - 1 - x) << 2;
    const ones = load<f32>(flat + at) + load<f32>(opposite + at) + load<f32>(flat + mirrored) + load<f32>(opposite + mirrored);
    store<f32>(out + at, load<f32>(out + at) / ones);
  }
}

/** Set bytes to 0. */
export function clear(at: usize, bytes: usize): void {
  memory.fill(at, 0, bytes);
}
