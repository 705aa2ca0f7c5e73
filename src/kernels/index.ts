/** Everything that the door `src/numeric/kernels.ts` offers. */
export { blurScratchBytes, blurTiles } from './blur';
export { forward, forwardToLines, inverse, inverseFromLines } from './fft';
export { kernelSpectrum, spectrumBytes, spectrumScratchBytes } from './kernel-spectrum';
export { positionOf, prepare, tablesBytes } from './tables';
export { clear, divideMirroredRow, divideRow } from './divide';
export { addPixels } from './pixel-box';
export { psfIntensity, psfScratchBytes } from './pupil';
export { lightRows, warpRows } from './warp';
