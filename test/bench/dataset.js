/** The rate of `dataset`: 640 x 480 in colour, a fresh lens for each picture, files read and written. By hand, after a build:
 *
 *     node test/bench/dataset.js [PICTURES]
 *
 * Against the peer in test/bench/peer where Python has NumPy, SciPy and OpenCV: its one process with two threads, and two processes
 * with one each. Our two threads make whole pictures side by side; their start is counted. */
import { execFile, spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import { encodePicture, readScene } from '../../dist/files/pictures/index.js';
import { dataset } from '../../dist/jobs/dataset.js';
import { appleBelt } from '../../scenes/draw/apple-belt.js';
import { toPng } from '../../scenes/draw/rasterise.js';

const COUNT = Number(process.argv[2] ?? 150);
const PEER_COUNT = Math.max(4, Math.round(COUNT / 8));
const ROUNDS = 3;
const SIZE = [640, 480];
const here = (name) => fileURLToPath(new URL(name, import.meta.url));
const folder = mkdtempSync(join(tmpdir(), 'bench-dataset-'));
process.on('exit', () => rmSync(folder, { recursive: true, force: true }));

await drawScenes();
const python = ['/usr/bin/python3', 'python3'].find(
  (name) => spawnSync(name, ['-c', 'import numpy, scipy.fft, cv2']).status === 0,
);
for (const format of ['png', 'jpeg']) {
  const ours = [];
  const oneProcess = [];
  const twoProcesses = [];
  for (let round = 0; round < ROUNDS; round++) {
    ours.push(await own(format));
    if (python === undefined) continue;
    oneProcess.push(await peer(format, 1, 2));
    twoProcesses.push(
      (await Promise.all([1, 2].map((seed) => peer(format, seed, 1)))).reduce((a, b) => Math.max(a, b)) / 2,
    );
  }
  const best = Math.min(...ours);
  console.log(`${format}: ${(1 / best).toFixed(1)} pictures a second (${(1000 * best).toFixed(0)} ms each)`);
  if (python === undefined) continue;
  const ratio = (peers) => (Math.min(...peers) / best).toFixed(2);
  console.log(`  ${ratio(oneProcess)} times the rate of the peer's one process with two threads`);
  console.log(`  ${ratio(twoProcesses)} times the rate of two processes of the peer with one thread each`);
}

/** Four scenes of the size of the pictures, cut out of a belt with apples. */
async function drawScenes() {
  mkdirSync(join(folder, 'scenes'));
  const belt = join(folder, 'belt.png');
  writeFileSync(belt, await toPng(appleBelt({ width: 1280, height: 960 })));
  const { raster } = await readScene(belt);
  const [width, height] = SIZE;
  for (let scene = 0; scene < 4; scene++) {
    const from = (scene >> 1) * height * raster.width + (scene & 1) * width;
    const planes = raster.planes.map((plane) => {
      const out = new Float32Array(width * height);
      for (let row = 0; row < height; row++) {
        out.set(plane.subarray(from + row * raster.width, from + row * raster.width + width), row * width);
      }
      return out;
    });
    writeFileSync(
      join(folder, 'scenes', `${scene}.png`),
      await encodePicture({ width, height, planes }, 'png'),
    );
  }
  writeFileSync(
    join(folder, 'case.rig.yaml'),
    `lens: { f_number: 2.8, full_field_mm: 6, wavelength_nm: 550, relative_illumination: none, waves: { W040: 0.8, W131: 1.2, W222: 1.0, W220: 0.7, W311: 8 } }
camera: { pixels: [640, 480], pixel_pitch_um: 2.4, bands_nm: { red: [620], green: [540], blue: [460] } }
`,
  );
}

/** Seconds of a picture of ours. */
async function own(format) {
  const recipe = join(folder, 'case.recipe.yaml');
  writeFileSync(
    recipe,
    `rig: case.rig.yaml
scenes: { images: scenes }
count: ${COUNT}
vary:
  lens.waves.W040: { normal: [0.8, 0.1] }
  lens.waves.W131: { normal: [1.2, 0.2] }
  lens.waves.W222: { normal: [1.0, 0.2] }
  lens.waves.W220: { normal: [0.7, 0.1] }
  lens.waves.W311: { normal: [8, 1] }
output: { format: ${format}, labels: none }
`,
  );
  const out = join(folder, 'ours');
  rmSync(out, { recursive: true, force: true });
  const { seconds } = await dataset({ recipe, out, threads: 2 });
  return seconds / COUNT;
}

/** Seconds of a picture of the peer's. */
async function peer(format, seed, workers) {
  const words = [here('./peer/dataset.py'), join(folder, 'scenes'), folder, String(PEER_COUNT)];
  const options = [
    '--format',
    format === 'jpeg' ? 'jpg' : format,
    '--seed',
    String(seed),
    '--workers',
    String(workers),
  ];
  const { stdout } = await promisify(execFile)(python, [...words, ...options]);
  return Number(stdout);
}
