/** The varying blur of one tile, or of two tiles at once, by overlap-add:
 *
 *   out = sum over nodes j of IFFT( FFT(tile w_j) FFT(K_j) ),   w_j(x, y) = wx_j(x) wy_j(y)
 *
 * Weights lie on the source side: every sample spreads with the kernel of its own place. They factor, so that columns take
 * one transform for each row of nodes, and only then rows one for each node.
 *
 * Two real tiles share each complex transform as z = a + i b:
 * - with the same kernels (mirrored tiles of a symmetric rig, read backwards): a real kernel keeps real and imaginary part
 *   apart, so z K is all there is to do;
 * - with kernels of their own: at each frequency k, z(k) and conj z(-k) tell a and i b apart; each meets its own kernel,
 *   and the two are joined again.
 *
 * Frequencies along y come first. A line holds four of them as lanes, x along it; it is worked on together with the line of
 * their negatives, so that half a spectrum of each real kernel is enough.
 *
 * Sources: overlap-add as in Oppenheim and Schafer, Discrete-Time Signal Processing; two real transforms in one complex one
 * as in Press et al., Numerical Recipes (both from memory).
 */
import { forward, forwardToLines, inverse, inverseFromLines } from './fft';
import { joinPair, lineOfNegatives, mix, mixNegatives, mixPair, multiply } from './mix';
import { addColumns, readColumns } from './plane';
import { BlurShape, BlurTile } from './shapes';
import { IM, RE, ROW, panelBytes, storeComplex } from './vector';

/** Panels that pass between a plane and the transforms in one go: eight make 128 bytes of a row, which processors fetch together. */
const PANELS: u32 = 8;
const COLUMNS: u32 = 4 * PANELS;

/** Work space of a blur, from shape.scratch on: panels of tile columns, four panels for lines, then the lines of all rows of nodes, then
 * a panel for each column of nodes (scenes of ones only). */
@inline
function columnsPanel(shape: BlurShape, index: u32): usize {
  return shape.scratch + <usize>index * panelBytes(shape.fftHeight);
}

@inline
function linePanel(shape: BlurShape, index: u32): usize {
  return columnsPanel(shape, PANELS) + <usize>index * panelBytes(max(shape.fftWidth, shape.fftHeight));
}

@inline
function lineOf(shape: BlurShape, nodeY: u32, m: u32): usize {
  return linePanel(shape, 4) + <usize>(nodeY * (shape.fftHeight / 4) + m) * panelBytes(shape.fftWidth);
}

/** Spectrum of the weights along x of a column of nodes, the same in all lanes. */
@inline
function weightSpectrum(shape: BlurShape, nodeX: u32): usize {
  return lineOf(shape, shape.nodesY, 0) + <usize>nodeX * panelBytes(shape.fftWidth);
}

/** Bytes of work space for a blur. */
export function blurScratchBytes(fftWidth: u32, fftHeight: u32, nodesX: u32, nodesY: u32): usize {
  const panels = <usize>PANELS * panelBytes(fftHeight) + 4 * panelBytes(max(fftWidth, fftHeight));
  return panels + <usize>(nodesY * (fftHeight / 4) + nodesX) * panelBytes(fftWidth);
}

/** Blur one tile, or two (`second` not null), and add the results to their targets. */
export function blurTiles(shape: BlurShape, first: BlurTile, second: BlurTile | null): void {
  if (isOnes(first)) transformWeights(shape, first, second);
  else transformColumns(shape, first, second);
  mixLines(shape, first, second);
  transformBack(shape, first, second);
}

/** Whether the tile shows a scene of ones, which has no plane. */
@inline
function isOnes(tile: BlurTile): bool {
  return tile.source == 0;
}

/** For a scene of ones the transform of z w_j is the product of the transforms of its weights: those along y become the first row of
 * each line, those along x panels of their own. */
function transformWeights(shape: BlurShape, first: BlurTile, second: BlurTile | null): void {
  const ones = columnsPanel(shape, 0);
  const work = linePanel(shape, 0);
  const one = f32x4.splat(1);
  const zero = f32x4.splat(0);
  for (let i: u32 = 0; i < shape.nodesX; i++) {
    for (let x: u32 = 0; x < shape.tileWidth; x++) storeComplex(work + <usize>x * ROW, one, zero);
    forward(work, weightsOf(shape, i), shape.tileWidth, weightSpectrum(shape, i), shape.fftWidth);
  }
  const oneOrNone = second !== null ? one : zero;
  for (let y: u32 = 0; y < shape.tileHeight; y++) storeComplex(ones + <usize>y * ROW, one, oneOrNone);
  for (let j: u32 = 0; j < shape.nodesY; j++) columnsToLines(shape, first, second, ones, j, 0);
}

/** Lines of z wy_j for every row j of nodes. */
function transformColumns(shape: BlurShape, first: BlurTile, second: BlurTile | null): void {
  if (second === null) memory.fill(columnsPanel(shape, 0), 0, <usize>PANELS * panelBytes(shape.fftHeight));
  for (let left: u32 = 0; left < shape.tileWidth; left += COLUMNS) {
    const panels = min(PANELS, (shape.tileWidth - left + 3) / 4);
    readTile(shape, first, left, panels, RE);
    if (second !== null) readTile(shape, second, left, panels, IM);
    for (let index: u32 = 0; index < panels; index++) {
      for (let j: u32 = 0; j < shape.nodesY; j++) {
        columnsToLines(shape, first, second, columnsPanel(shape, index), j, left + 4 * index);
      }
    }
  }
}

/** Transform four columns under the weights of the row j of nodes and write them into the lines from x on. */
function columnsToLines(
  shape: BlurShape, first: BlurTile, second: BlurTile | null, panel: usize, j: u32, x: u32,
): void {
  const height = shape.tileHeight;
  const weights = <usize>(j * height) << 2;
  const weightsRe = first.weightsY + weights;
  const weightsIm = second !== null ? second.weightsY + weights : weightsRe;
  const work = linePanel(shape, 0);
  const lines = lineOf(shape, j, 0) + <usize>x * ROW;
  const lineBytes = panelBytes(shape.fftWidth);
  forwardToLines(panel, weightsRe, weightsIm, height, work, shape.fftHeight, lines, lineBytes);
}

function readTile(shape: BlurShape, tile: BlurTile, left: u32, panels: u32, part: usize): void {
  readColumns(
    tile.source, tile.sourceStride, tile.frameWidth, tile.frameHeight, tile.mirror,
    tile.left + <i32>left, tile.top, shape.tileHeight,
    columnsPanel(shape, 0) + part, panels, panelBytes(shape.fftHeight),
  );
}

/** Transform the lines, multiply with the kernels, add up over the nodes, transform back along x. The results take the place of
 * the first row of nodes. */
function mixLines(shape: BlurShape, first: BlurTile, second: BlurTile | null): void {
  const isShared = second === null || second.spectra == 0;
  let half: usize = 0; // place of line m in the half spectra
  for (let m: u32 = 0; m < shape.fftHeight / 4; m++) {
    const negatives = lineOfNegatives(m, shape.fftHeight);
    if (negatives < m) continue;
    const kernelOffset = half++ * <usize>shape.fftWidth * ROW;
    if (isShared) mixSharedLine(shape, first, m, negatives, kernelOffset);
    else mixPairLine(shape, first, second!, m, negatives, kernelOffset);
  }
}

/** Line m and its line of negatives where both tiles have the same kernels. */
function mixSharedLine(shape: BlurShape, tile: BlurTile, m: u32, negatives: u32, kernelOffset: usize): void {
  const n = shape.fftWidth;
  const z = linePanel(shape, 0);
  const sum = linePanel(shape, 1);
  const sumOfNegatives = linePanel(shape, 2);
  memory.fill(sum, 0, <usize>n * ROW);
  memory.fill(sumOfNegatives, 0, <usize>n * ROW);
  for (let j: u32 = 0; j < shape.nodesY; j++) {
    for (let i: u32 = 0; i < shape.nodesX; i++) {
      const spectrum = spectrumOf(shape, tile, i, j);
      if (spectrum == 0) continue;
      const kernel = spectrum + kernelOffset;
      transformLine(shape, tile, i, lineOf(shape, j, m), z);
      mix(z, kernel, sum, n);
      if (negatives == m) continue;
      transformLine(shape, tile, i, lineOf(shape, j, negatives), z);
      mixNegatives(z, kernel, sumOfNegatives, n);
    }
  }
  inverse(sum, lineOf(shape, 0, m), n);
  if (negatives != m) inverse(sumOfNegatives, lineOf(shape, 0, negatives), n);
}

/** Line m and its line of negatives where each tile has kernels of its own. */
function mixPairLine(
  shape: BlurShape, first: BlurTile, second: BlurTile, m: u32, negatives: u32, kernelOffset: usize,
): void {
  const n = shape.fftWidth;
  const z = linePanel(shape, 0);
  const zOfNegatives = negatives == m ? z : linePanel(shape, 1);
  const sumA = linePanel(shape, 2);
  const sumB = linePanel(shape, 3);
  memory.fill(sumA, 0, <usize>n * ROW);
  memory.fill(sumB, 0, <usize>n * ROW);
  for (let j: u32 = 0; j < shape.nodesY; j++) {
    for (let i: u32 = 0; i < shape.nodesX; i++) {
      const kernelA = spectrumOf(shape, first, i, j);
      const kernelB = spectrumOf(shape, second, i, j);
      if (kernelA == 0 || kernelB == 0) continue;
      transformLine(shape, first, i, lineOf(shape, j, m), z);
      if (negatives != m) transformLine(shape, first, i, lineOf(shape, j, negatives), zOfNegatives);
      mixPair(z, zOfNegatives, kernelA + kernelOffset, kernelB + kernelOffset, sumA, sumB, n, m == 0);
    }
  }
  joinPair(sumA, sumB, negatives == m ? 0 : zOfNegatives, n);
  inverse(sumA, lineOf(shape, 0, m), n);
  if (negatives != m) inverse(zOfNegatives, lineOf(shape, 0, negatives), n);
}

/** Transform a line along x under the weights of the column i of nodes. */
@inline
function transformLine(shape: BlurShape, tile: BlurTile, i: u32, line: usize, z: usize): void {
  if (isOnes(tile)) multiply(line, weightSpectrum(shape, i), z, shape.fftWidth);
  else forward(line, weightsOf(shape, i), shape.tileWidth, z, shape.fftWidth);
}

@inline
function spectrumOf(shape: BlurShape, tile: BlurTile, i: u32, j: u32): usize {
  return load<usize>(tile.spectra + (<usize>(j * shape.nodesX + i) << 2));
}

@inline
function weightsOf(shape: BlurShape, i: u32): usize {
  return shape.weightsX + (<usize>(i * shape.tileWidth) << 2);
}

/** Transform the blurred lines back along y and add the tiles to their targets. */
function transformBack(shape: BlurShape, first: BlurTile, second: BlurTile | null): void {
  const width = shape.tileWidth + shape.kernelSize - 1;
  // neither direction of the transforms is scaled; telling two tiles apart leaves a factor of 2
  const isPair = second !== null && second.spectra != 0;
  const scale: f32 = (isPair ? <f32>0.5 : <f32>1) / <f32>(shape.fftWidth * shape.fftHeight);
  for (let left: u32 = 0; left < width; left += COLUMNS) {
    const columns = min(COLUMNS, width - left);
    const isSeen = reachesFrame(shape, first, left, columns);
    if (!isSeen && (second === null || !reachesFrame(shape, second, left, columns))) continue;
    for (let x: u32 = 0; x < columns; x += 4) {
      const lines = lineOf(shape, 0, 0) + <usize>(left + x) * ROW;
      inverseFromLines(lines, panelBytes(shape.fftWidth), columnsPanel(shape, x / 4), shape.fftHeight);
    }
    addTile(shape, first, left, columns, RE, scale);
    if (second !== null) addTile(shape, second, left, columns, IM, scale);
  }
}

function addTile(shape: BlurShape, tile: BlurTile, left: u32, columns: u32, part: usize, scale: f32): void {
  const top = tile.top - reachOf(shape);
  const rows = shape.tileHeight + shape.kernelSize - 1;
  const panels = columnsPanel(shape, 0) + part;
  const panelStep = panelBytes(shape.fftHeight);
  addColumns(tile, resultLeft(shape, tile, left), top, columns, rows, panels, panelStep, scale);
}

/** Whether any of the result's columns from `left` on lies inside the frame. */
function reachesFrame(shape: BlurShape, tile: BlurTile, left: u32, columns: u32): bool {
  const from = resultLeft(shape, tile, left);
  return from < tile.frameWidth && from + <i32>columns > 0;
}

@inline
function resultLeft(shape: BlurShape, tile: BlurTile, left: u32): i32 {
  return tile.left - reachOf(shape) + <i32>left;
}

/** How far a result reaches out of its tile to the left and to the top. */
@inline
function reachOf(shape: BlurShape): i32 {
  return <i32>(shape.kernelSize / 2);
}
