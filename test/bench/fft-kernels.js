/** Speed of the kernels' transforms against fft.js, both in this run. By hand, after a build: node test/bench/fft-kernels.js
 *
 * Four float32 columns at once against one float64 transform four times; times are for one transform. fft.js also writes its spectra
 * in natural order, which the kernels leave out since no product of spectra needs it.
 */
import FFT from 'fft.js';
import { COMPLEX_ROW_BYTES, instantiateKernels } from '../../dist/numeric/kernels.js';

const SIZES = [64, 128, 256, 512, 1024, 2048];
const ROUNDS = 25;
const ROUND_MS = 2;

const memory = new WebAssembly.Memory({ initial: 1024, maximum: 65536, shared: true });
const kernels = instantiateKernels(memory);
const [tables, weights, panel, target, zeros, lines] = [1, 2, 3, 4, 5, 8].map((mib) => mib * 2 ** 20);
kernels.prepare(tables);
new Float32Array(memory.buffer, weights, 2048).fill(1);

/** Microseconds of each kind, the rounds of all kinds interleaved so that a drift of the machine hits all: the lower quartile. */
function microseconds(kinds) {
  const times = kinds.map(() => []);
  const repeats = kinds.map((run) => {
    for (let i = 0; i < 200; i++) run(); // warm
    const start = performance.now();
    for (let i = 0; i < 50; i++) run();
    return Math.max(1, Math.ceil((50 * ROUND_MS) / (performance.now() - start)));
  });
  for (let round = 0; round < ROUNDS; round++) {
    kinds.forEach((run, kind) => {
      const start = performance.now();
      for (let i = 0; i < repeats[kind]; i++) run();
      times[kind].push(((performance.now() - start) / repeats[kind]) * 1000);
    });
  }
  return times.map((list) => list.sort((a, b) => a - b)[Math.floor(list.length / 4)]);
}

console.log(
  'microseconds a transform; ratio: time of fft.js / time of the kernel, above 1 the kernel is faster',
);
console.log('   n   fft.js  forward  ratio  3/4 used  1/4 used  inverse  to lines  from lines');
for (const n of SIZES) {
  const plan = new FFT(n);
  const input = plan.createComplexArray().fill(0.25);
  const output = plan.createComplexArray();
  new Float32Array(memory.buffer, panel, 8 * n).fill(0.25);
  const lineBytes = n * COMPLEX_ROW_BYTES + 64;
  const [reference, ...four] = microseconds([
    () => plan.transform(output, input),
    () => kernels.forward(panel, weights, n, target, n),
    () => kernels.forward(panel, weights, (3 * n) / 4, target, n),
    () => kernels.forward(panel, weights, n / 4, target, n),
    () => kernels.inverse(zeros, target, n), // overwrites its source
    () => kernels.forwardToLines(panel, weights, weights, (3 * n) / 4, target, n, lines, lineBytes),
    () => kernels.inverseFromLines(lines, lineBytes, target, n),
  ]);
  const [full, threeQuarters, quarter, inverse, toLines, fromLines] = four.map((time) => time / 4);
  const ratio = (reference / full).toFixed(1);
  const columns = [threeQuarters, quarter, inverse, toLines, fromLines].map((time) => time.toFixed(3));
  console.log(
    [
      String(n).padStart(4),
      reference.toFixed(2).padStart(8),
      full.toFixed(3).padStart(8),
      ratio.padStart(6),
    ].join(' ') + columns.map((text) => text.padStart(10)).join(''),
  );
}
