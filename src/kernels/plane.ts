/** Between planes and panels. Several panels are filled or emptied in one go, since a plane is best walked along its rows. */
import { BlurTile, MIRROR_X, MIRROR_Y } from './shapes';
import { ROW, add, mul, reverseLanes } from './vector';

/** Read rows top ... top + rows - 1 of the columns from `left` on into one part (real or imaginary) of panels of four columns
 * each. Outside of the plane its edge goes on.
 * @param stride bytes from one row of the plane to the next
 * @param mirror how the plane is seen: MIRROR_X, MIRROR_Y, both or none; `left` and `top` count in the plane so seen
 * @param part the first panel's part; the next panel lies `panelStep` bytes further on */
export function readColumns(
  plane: usize, stride: usize, width: i32, height: i32, mirror: u32,
  left: i32, top: i32, rows: i32, part: usize, panels: i32, panelStep: usize,
): void {
  const columns = 4 * panels;
  const isInside = left >= 0 && left + columns <= width;
  const isMirrored = mirror & MIRROR_X;
  for (let y = top; y < top + rows; y++, part += ROW) {
    const row = plane + <usize>seen(clamp(y, height), height, mirror & MIRROR_Y) * stride;
    let to = part;
    if (!isInside) {
      for (let x = left; x < left + columns; x += 4, to += panelStep) {
        v128.store(to, readClamped(row, width, isMirrored, x));
      }
    } else if (isMirrored) {
      let from = row + (<usize>(width - 4 - left) << 2);
      for (let panel = 0; panel < panels; panel++, from -= 16, to += panelStep) {
        v128.store(to, reverseLanes(v128.load(from)));
      }
    } else {
      let from = row + (<usize>left << 2);
      for (let panel = 0; panel < panels; panel++, from += 16, to += panelStep) {
        v128.store(to, v128.load(from));
      }
    }
  }
}

/** Samples x ... x + 3 of a row as it is seen, any of which may lie outside. */
function readClamped(row: usize, width: i32, isMirrored: u32, x: i32): v128 {
  let four = v128.load32_zero(clampedAt(row, width, isMirrored, x));
  four = v128.load_lane<f32>(clampedAt(row, width, isMirrored, x + 1), four, 1);
  four = v128.load_lane<f32>(clampedAt(row, width, isMirrored, x + 2), four, 2);
  return v128.load_lane<f32>(clampedAt(row, width, isMirrored, x + 3), four, 3);
}

@inline
function clampedAt(row: usize, width: i32, isMirrored: u32, x: i32): usize {
  return row + (<usize>seen(clamp(x, width), width, isMirrored) << 2);
}

/** Add `scale` times one part of some panels to the target's rows from `top` and columns from `left` on, in the frame as the tile
 * sees it. Only the first `columns` columns and `rows` rows of the panels count, and of those what lies inside the frame. */
export function addColumns(
  tile: BlurTile, left: i32, top: i32, columns: i32, rows: i32, part: usize, panelStep: usize, scale: f32,
): void {
  const width = tile.frameWidth;
  const isWhole = (columns & 3) == 0 && left >= 0 && left + columns <= width;
  const isMirrored = tile.mirror & MIRROR_X;
  const to = min(rows, tile.frameHeight - top);
  const scales = f32x4.splat(scale);
  for (let y = max(0, -top); y < to; y++) {
    const seenY = seen(top + y, tile.frameHeight, tile.mirror & MIRROR_Y);
    const row = tile.target + <usize>seenY * tile.targetStride;
    let sum = part + <usize>y * ROW;
    if (!isWhole) {
      for (let x = 0; x < columns; x += 4, sum += panelStep) {
        addSome(row, width, isMirrored, left + x, columns - x, mul(v128.load(sum), scales));
      }
    } else if (isMirrored) {
      let at = row + (<usize>(width - 4 - left) << 2);
      for (let x = 0; x < columns; x += 4, at -= 16, sum += panelStep) {
        v128.store(at, add(v128.load(at), reverseLanes(mul(v128.load(sum), scales))));
      }
    } else {
      let at = row + (<usize>left << 2);
      for (let x = 0; x < columns; x += 4, at += 16, sum += panelStep) {
        v128.store(at, add(v128.load(at), mul(v128.load(sum), scales)));
      }
    }
  }
}

/** Add to samples x ... x + 3 of a row as it is seen, as far as they are among the first `count` and inside the frame. */
function addSome(row: usize, width: i32, isMirrored: u32, x: i32, count: i32, values: v128): void {
  if (count >= 4 && x >= 0 && x + 4 <= width) {
    const at = row + (<usize>(isMirrored ? width - 4 - x : x) << 2);
    v128.store(at, add(v128.load(at), isMirrored ? reverseLanes(values) : values));
    return;
  }
  const to = min(min(count, 4), width - x);
  for (let lane = 0; lane < to; lane++, values = nextLane(values)) {
    if (x + lane < 0) continue;
    const at = row + (<usize>seen(x + lane, width, isMirrored) << 2);
    store<f32>(at, load<f32>(at) + f32x4.extract_lane(values, 0));
  }
}

@inline
function nextLane(a: v128): v128 {
  return v128.shuffle<f32>(a, a, 1, 2, 3, 0);
}

/** Where the row (or column) `index` of a mirrored plane lies in the plane itself. */
@inline
function seen(index: i32, count: i32, isMirrored: u32): i32 {
  return isMirrored != 0 ? count - 1 - index : index;
}

@inline
function clamp(index: i32, count: i32): i32 {
  return min(max(index, 0), count - 1);
}
