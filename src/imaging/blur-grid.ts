/** The geometry of the blur: square tiles over the picture and its border, nodes at which PSFs are known, weights that blend them. */

/** A grid of square tiles of source samples, centred on the picture, and of nodes between which the PSF is interpolated.
 *
 * Every tile carries (order + 1)^2 nodes, evenly spread from edge to edge and shared with the neighbours, and interpolates between
 * them by polynomials of that order in x and in y (order 1 is the bilinear blend). The picture is extended past its frame by its edge
 * as far as a kernel reaches; the PSF there is the one of the nearest point of the frame, so nodes never leave the frame.
 */
export interface BlurGrid {
  /** Size of the picture in samples. */
  width: number;
  height: number;
  /** Side of a kernel in samples. */
  kernelPx: number;
  /** Side of a tile in samples. */
  tilePx: number;
  /** Order of the interpolation between nodes: 1, 2 or 3. */
  order: number;
  tilesX: number;
  tilesY: number;
  /** The first sample of the first tile, 0 or less. */
  originX: number;
  originY: number;
}

/** How far a kernel reaches past the frame. */
export function kernelReach(kernelPx: number): number {
  return Math.floor(kernelPx / 2);
}

/** The grid with tiles of about `tilePx` samples (never more) for a picture.
 * Tiles are shrunk to leave little overhang, and fit to the picture's parity so that the grid is symmetric to the sample. */
export function makeBlurGrid(
  width: number,
  height: number,
  kernelPx: number,
  tilePx: number,
  order: number,
): BlurGrid {
  const reach = kernelReach(kernelPx);
  const span = (size: number) => size + 2 * reach;
  // a symmetric grid needs tiles * tilePx of the parity of the size, on both axes
  let tile = Math.max(1, Math.floor(tilePx));
  const shrunk = Math.max(
    Math.ceil(span(width) / Math.ceil(span(width) / tile)),
    Math.ceil(span(height) / Math.ceil(span(height) / tile)),
  );
  tile = Math.min(tile, shrunk);
  const needsOdd = width % 2 === 1 || height % 2 === 1;
  if (needsOdd && tile % 2 === 0) tile = Math.max(1, tile - 1);
  const tiles = (size: number) => {
    const least = Math.ceil(span(size) / tile);
    return (least * tile - size) % 2 === 0 ? least : least + 1;
  };
  const tilesX = tiles(width);
  const tilesY = tiles(height);
  return {
    width,
    height,
    kernelPx,
    tilePx: tile,
    order,
    tilesX,
    tilesY,
    originX: (width - tilesX * tile) / 2,
    originY: (height - tilesY * tile) / 2,
  };
}

/** Number of nodes along an axis of `tiles` tiles. */
export function nodeCount(tiles: number, order: number): number {
  return tiles * order + 1;
}

/** Place of a node along an axis, in samples of the picture, inside the frame.
 * Inside a tile nodes are evenly spread between its two edges, after these have been brought back into the frame. */
export function nodePosition(
  node: number,
  origin: number,
  tilePx: number,
  order: number,
  size: number,
): number {
  const tile = Math.floor(node / order);
  const step = node - tile * order;
  const near = tileEdge(tile, origin, tilePx, size);
  if (step === 0) return near;
  const far = tileEdge(tile + 1, origin, tilePx, size);
  return near + ((far - near) * step) / order;
}

/** Place of the edge between tile `tile - 1` and tile `tile`, brought back into the frame. */
export function tileEdge(tile: number, origin: number, tilePx: number, size: number): number {
  return Math.min(size - 0.5, Math.max(-0.5, origin + tile * tilePx - 0.5));
}

/** Blending weights of a tile's samples along one axis.
 * @param out (order + 1) x tilePx, a row a node: the Lagrange polynomial of the node at each sample's place, clamped into the frame
 */
export function blendWeights(
  tile: number,
  origin: number,
  tilePx: number,
  order: number,
  size: number,
  out: Float64Array,
): void {
  const near = tileEdge(tile, origin, tilePx, size);
  const far = tileEdge(tile + 1, origin, tilePx, size);
  for (let i = 0; i < tilePx; i++) {
    const place = Math.min(size - 0.5, Math.max(-0.5, origin + tile * tilePx + i));
    const u = far > near ? (place - near) / (far - near) : 0;
    for (let node = 0; node <= order; node++) out[node * tilePx + i] = lagrange(node, order, u);
  }
}

/** The polynomial of degree `order` on [0, 1] that is 1 at node / order and 0 at the other nodes. */
export function lagrange(node: number, order: number, u: number): number {
  let value = 1;
  for (let other = 0; other <= order; other++) {
    if (other !== node) value *= (u * order - other) / (node - other);
  }
  return value;
}
