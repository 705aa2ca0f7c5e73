/** One process of the bench: forms a picture several times and prints the seconds as JSON. Its one argument is a JSON object:
 * size, threads, lines, tiltDeg, kernelPx, engine, mono, scale, rounds; sceneOnly: write the scene to that file and stop;
 * files: render from file to file, and report the peak of memory. */
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import sharp from 'sharp';
import { Crew } from '../../dist/imaging/crew.js';
import { formImage, prepareBands } from '../../dist/imaging/form-image.js';
import { render } from '../../dist/index.js';

const setup = JSON.parse(process.argv[2]);
const { size, threads = 2, lines = 1, tiltDeg = 0, mono = false, scale = 1, rounds = 3, folder } = setup;
const [width, height] = size;

if (setup.sceneOnly !== undefined) await writeScene(setup.sceneOnly);
else if (setup.files) await renderFiles();
else await formRounds();

/** The lens of 12 megapixels at 2.4 um; `scale` keeps its field on pictures of other sizes. */
function rig() {
  const waves = { W040: 0.8, W131: 1.2, W222: 1.0, W220: 0.7, W311: 8, W020: 0, W111: 0 };
  const spread = (nm) =>
    lines === 1 ? [{ nm, weight: 1 }] : [-20, 0, 20].map((by) => ({ nm: nm + by, weight: 1 / 3 }));
  const bands = { red: 620, green: 540, blue: 460 };
  return {
    lens: {
      name: 'bench',
      fNumber: 2.8,
      fullFieldMm: 6 * (width / 4000),
      wavelengthNm: 550,
      waves,
      axialUm: [],
      lateralUm: [],
      relativeIllumination: 'none',
    },
    camera: {
      pixels: size,
      pixelPitchUm: 2.4,
      fillFactor: 1,
      bands: mono
        ? [{ name: 'mono', lines: spread(540) }]
        : Object.entries(bands).map(([name, nm]) => ({ name, lines: spread(nm) })),
      mosaic: 'none',
    },
    mount: {
      fNumber: 2.8,
      sensorShiftUm: 0,
      sensorTiltDeg: [tiltDeg, 0],
      axisPx: [(width - 1) / 2, (height - 1) / 2],
    },
    scale,
  };
}

/** A scene of repeatable noise, smooth over a few pixels. */
function samples(channels) {
  const data = Buffer.alloc(width * height * channels);
  let state = 12345;
  for (let i = 0; i < data.length; i++) {
    if (i % 5 === 0) state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    data[i] = state >>> 24;
  }
  return data;
}

async function writeScene(file) {
  if (existsSync(file)) return;
  const channels = mono ? 1 : 3;
  const picture = sharp(samples(channels), { raw: { width, height, channels } });
  await picture
    .toColourspace(mono ? 'b-w' : 'srgb')
    .png({ compressionLevel: 1 })
    .toFile(file);
}

async function formRounds() {
  const begin = performance.now();
  const crew = new Crew(threads, setup.engine);
  const count = mono ? 1 : 3;
  const data = samples(1);
  const scene = Array.from({ length: count }, () =>
    crew.arena.floats(crew.arena.allocateFloats(width * height), width * height),
  );
  const madeScene = performance.now();
  const mark = crew.arena.mark();
  const tolerances = { blend: setup.tolerance ?? 0.004, kernel: 0.005, kernelPx: setup.kernelPx };
  const all = [];
  let accuracy;
  for (let round = 0; round <= rounds; round++) {
    crew.arena.release(mark);
    for (const plane of scene) for (let i = 0; i < plane.length; i++) plane[i] = data[i] / 255; // the last round's picture lies there
    const start = performance.now();
    const bands = await prepareBands(crew, rig(), 1, tolerances);
    const psf = (performance.now() - start) / 1000;
    const formed = await formImage(crew, rig(), scene, 1, bands);
    all.push({ psf, ...formed.seconds, total: (performance.now() - start) / 1000 });
    accuracy = formed.accuracy;
  }
  await crew.close();
  // the first round is cold: compilers, first touch of memory, and the start of the workers, which ran while the scene was made
  const workerStart = Math.min(0.15, (madeScene - begin) / 1000);
  const [first, ...warm] = all;
  warm.sort((a, b) => a.total - b.total);
  const cold = { ...first, total: first.total + workerStart };
  console.log(JSON.stringify({ cold, warm: warm[Math.floor(warm.length / 2)], ...accuracy }));
}

async function renderFiles() {
  const scene = join(folder, `${width}-${mono ? 1 : 3}.png`);
  if (!existsSync(scene)) {
    const { execFileSync } = await import('node:child_process');
    execFileSync(process.execPath, [process.argv[1], JSON.stringify({ ...setup, sceneOnly: scene })]);
  }
  await render({ rig: rig(), scene, out: join(folder, 'out.png'), threads });
  console.log(JSON.stringify({ peakMb: process.resourceUsage().maxRSS / 1024 }));
}
