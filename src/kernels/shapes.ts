/** The parameter blocks that the caller of the blur fills in: 32-bit fields in this order, nothing between them. */

/** What all tiles of a call have in common. */
@unmanaged
export class BlurShape {
  /** Sizes of the transforms along x and y. */
  fftWidth: u32;
  fftHeight: u32;
  /** Sides of a tile; with the kernel's side less 1 they may not exceed the sizes of the transforms. */
  tileWidth: u32;
  tileHeight: u32;
  kernelSize: u32;
  /** Nodes along x and y. */
  nodesX: u32;
  nodesY: u32;
  /** float32[nodesX][tileWidth] */
  weightsX: usize;
  /** Work space of this thread, `blurScratchBytes` bytes. */
  scratch: usize;
}

/** One tile: where it is read, where its result is added, with which kernels. */
@unmanaged
export class BlurTile {
  /** float32 planes of the frame, and the bytes from one of their rows to the next. A source of 0 stands for a scene of ones, then
   * for both tiles of a call. */
  source: usize;
  sourceStride: usize;
  target: usize;
  targetStride: usize;
  frameWidth: i32;
  frameHeight: i32;
  /** First sample of the tile, which may lie outside the frame. */
  left: i32;
  top: i32;
  /** MIRROR_X, MIRROR_Y, both or none: how the frame is seen. `left` and `top` count in the frame so seen. */
  mirror: u32;
  /** float32[nodesY][tileHeight] */
  weightsY: usize;
  /** uint32[nodesY][nodesX]: addresses of the nodes' spectra; a node with address 0 is left out (of both tiles).
   * In the second tile 0 in place of this list stands for the kernels of the first. */
  spectra: usize;
}

/** The frame is seen mirrored left to right, top to bottom. */
export const MIRROR_X: u32 = 1;
export const MIRROR_Y: u32 = 2;
