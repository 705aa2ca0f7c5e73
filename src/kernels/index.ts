/** Everything that the door `src/numeric/kernels.ts` offers. */
export { prepare, tablesBytes, positionOf } from './tables';
export { forward, inverse, forwardToLines, inverseFromLines } from './fft';
