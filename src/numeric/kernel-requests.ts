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

/** A warp of one plane; see `src/kernels/warp.ts`. */
export interface WarpRequest {
  width: number;
  height: number;
  axisX: number;
  axisY: number;
  stepsPerSquare: number;
  scale: number;
  illumination: number;
  scene: number;
  out: number;
}

export const WARP_REQUEST_BYTES = 48;

/** Write a warp's block at `at`. */
export function writeWarpRequest(memory: WebAssembly.Memory, at: number, request: WarpRequest): void {
  const { width, height, axisX, axisY, stepsPerSquare, scale, illumination, scene, out } = request;
  new Int32Array(memory.buffer, at, 2).set([width, height]);
  new Float64Array(memory.buffer, at + 8, 3).set([axisX, axisY, stepsPerSquare]);
  new Uint32Array(memory.buffer, at + 32, 4).set([scale, illumination, scene, out]);
}
