/** Speed of the tile blur of the kernels, its parts in multiples of one transform. By hand, after a build:
 * node test/bench/blur-kernels.js */
import {
  BLUR_SHAPE_BYTES,
  BLUR_TILE_BYTES,
  instantiateKernels,
  MIRROR_Y,
  writeBlurShape,
  writeBlurTile,
} from '../../dist/numeric/kernels.js';

const FRAME_WIDTH = 2000;
const FRAME_HEIGHT = 1200;
const ROUNDS = Number(process.env.ROUNDS ?? 25);

/** Tile, kernel, FFT, nodes along each axis. */
const CASES = [
  [192, 64, 256, 2],
  [192, 64, 256, 1],
  [192, 64, 256, 3],
  [192, 64, 256, 4],
  [96, 32, 128, 2],
  [98, 31, 128, 3],
  [384, 128, 512, 2],
  [384, 128, 512, 3],
  [768, 256, 1024, 2],
];

const memory = new WebAssembly.Memory({ initial: 8000, maximum: 65536, shared: true });
const kernels = instantiateKernels(memory);
let top = 65536;
function allocate(bytes) {
  const address = top;
  top = Math.ceil((address + bytes) / 64) * 64;
  return address;
}
function floats(address, count) {
  return new Float32Array(memory.buffer, address, count);
}
kernels.prepare(allocate(kernels.tablesBytes()));
const stride = 4 * FRAME_WIDTH;
const source = allocate(stride * FRAME_HEIGHT);
const target = allocate(stride * FRAME_HEIGHT);
floats(source, FRAME_WIDTH * FRAME_HEIGHT).fill(0.5);
const mark = top;

function lowest(run) {
  for (let i = 0; i < 5; i++) run();
  const times = Array.from({ length: ROUNDS }, () => {
    const start = performance.now();
    run();
    return performance.now() - start;
  });
  return Math.min(...times) * 1000;
}

console.log('microseconds; "ns a pixel" counts the source samples of both tiles');
console.log('tile kernel  fft nodes   shared   ns/px     pair   ns/px   single  spectrum');
for (const [tile, kernelSize, fft, nodes] of CASES) {
  top = mark;
  const scratch = allocate(kernels.blurScratchBytes(fft, fft, nodes, nodes));
  const spectrumScratch = allocate(kernels.spectrumScratchBytes(kernelSize, fft));
  const weights = allocate(4 * nodes * tile);
  floats(weights, nodes * tile).fill(1 / nodes);
  const kernel = allocate(4 * kernelSize ** 2);
  floats(kernel, kernelSize ** 2).fill(1 / kernelSize ** 2);
  const list = allocate(4 * nodes ** 2);
  const otherList = allocate(4 * nodes ** 2);
  for (const at of [list, otherList]) {
    for (let node = 0; node < nodes ** 2; node++) {
      const spectrum = allocate(kernels.spectrumBytes(fft, fft));
      kernels.kernelSpectrum(kernel, kernelSize, 0, fft, fft, spectrumScratch, spectrum);
      new Uint32Array(memory.buffer, at, nodes ** 2)[node] = spectrum;
    }
  }
  const shape = allocate(BLUR_SHAPE_BYTES);
  const sides = { fftWidth: fft, fftHeight: fft, tileWidth: tile, tileHeight: tile, kernelSize };
  writeBlurShape(memory, shape, { ...sides, nodesX: nodes, nodesY: nodes, weightsX: weights, scratch });
  const place = {
    source,
    sourceStride: stride,
    target,
    targetStride: stride,
    frameWidth: FRAME_WIDTH,
    frameHeight: FRAME_HEIGHT,
  };
  const [first, shared, other] = [list, 0, otherList].map((spectra, index) => {
    const at = allocate(BLUR_TILE_BYTES);
    const mirror = index === 1 ? MIRROR_Y : 0;
    writeBlurTile(memory, at, {
      ...place,
      left: 256 + tile * (index === 2 ? 1 : 0),
      top: 130,
      mirror,
      weightsY: weights,
      spectra,
    });
    return at;
  });
  const times = [
    lowest(() => kernels.blurTiles(shape, first, shared)),
    lowest(() => kernels.blurTiles(shape, first, other)),
    lowest(() => kernels.blurTiles(shape, first, 0)),
    lowest(() => kernels.kernelSpectrum(kernel, kernelSize, 0, fft, fft, spectrumScratch, allocate(0) + 0)),
  ];
  const pixels = 2 * tile ** 2;
  const perPixel = (time) => ((time * 1000) / pixels).toFixed(1).padStart(7);
  console.log(
    [tile, kernelSize, fft, nodes].map((value, i) => String(value).padStart([4, 7, 5, 6][i])).join('') +
      times[0].toFixed(0).padStart(9) +
      ' ' +
      perPixel(times[0]) +
      times[1].toFixed(0).padStart(9) +
      ' ' +
      perPixel(times[1]) +
      times[2].toFixed(0).padStart(9) +
      times[3].toFixed(0).padStart(10),
  );
}
