/** Requests to the compiled kernels for PSFs and warps: blocks of memory with fields in a fixed order. */

/** One PSF on a window of its fine grid; see `src/kernels/pupil.ts`. */
export interface PsfRequest {
  n: number;
  half: number;
  radius: number;
  w40: number;
  w31: number;
  w22: number;
  w20: number;
  w11: number;
  cos: number;
  sin: number;
  ones: number;
  scratch: number;
  side: number;
  columnOffsets: number;
  rowOfPosition: number;
  out: number;
}

export const PSF_REQUEST_BYTES = 96;

/** Write a PSF's block at `at`. */
export function writePsfRequest(memory: WebAssembly.Memory, at: number, request: PsfRequest): void {
  const { n, half, radius, w40, w31, w22, w20, w11, cos, sin } = request;
  const { ones, scratch, side, columnOffsets, rowOfPosition, out } = request;
  new Uint32Array(memory.buffer, at, 2).set([n, half]);
  new Float64Array(memory.buffer, at + 8, 8).set([radius, w40, w31, w22, w20, w11, cos, sin]);
  new Uint32Array(memory.buffer, at + 72, 6).set([ones, scratch, side, columnOffsets, rowOfPosition, out]);
}

/** A warp of planes; see `src/kernels/warp.ts`. */
export interface WarpRequest {
  width: number;
  height: number;
  sceneWidth: number;
  sceneHeight: number;
  axisX: number;
  axisY: number;
  sceneAxisX: number;
  sceneAxisY: number;
  stepsPerSquare: number;
  scale: number;
  illumination: number;
  /** One to MOST_WARP_PLANES planes that are moved alike. */
  planes: readonly { sceneAt: number; outAt: number }[];
}

export const MOST_WARP_PLANES = 3;
export const WARP_REQUEST_BYTES = 92;

/** Write a warp's block at `at`. */
export function writeWarpRequest(memory: WebAssembly.Memory, at: number, request: WarpRequest): void {
  const { width, height, sceneWidth, sceneHeight, scale, illumination, planes } = request;
  const { axisX, axisY, sceneAxisX, sceneAxisY, stepsPerSquare } = request;
  new Int32Array(memory.buffer, at, 4).set([width, height, sceneWidth, sceneHeight]);
  new Float64Array(memory.buffer, at + 16, 5).set([axisX, axisY, sceneAxisX, sceneAxisY, stepsPerSquare]);
  const addresses = planes.flatMap(({ sceneAt, outAt }) => [sceneAt, outAt]);
  new Uint32Array(memory.buffer, at + 56, 3 + addresses.length).set([
    scale,
    illumination,
    planes.length,
    ...addresses,
  ]);
}
