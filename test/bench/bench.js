/** The figures that this project watches, in one run, as ratios with their direction in words.
 *
 *   npm run bench                  everything
 *   npm run bench -- --json FILE   the figures as JSON, to hold two commits against each other
 *   npm run bench -- --quick       one round each, without the large pictures
 *
 * The peer is what an engineer would write today with NumPy, SciPy and OpenCV (test/bench/peer): on Debian
 * `apt-get install python3-numpy python3-scipy python3-opencv`. Without it our own reference engine stands in. */
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { cpus, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';

const { values: options } = parseArgs({
  options: { json: { type: 'string' }, quick: { type: 'boolean', default: false } },
});
const here = (name) => fileURLToPath(new URL(name, import.meta.url));
const folder = mkdtempSync(join(tmpdir(), 'foreglass-bench-'));
process.on('exit', () => rmSync(folder, { recursive: true, force: true }));

/** Colour, three bands of three wavelengths, four fields by default. */
const ZONES_RIG = `
lens:
  focal_length_mm: 8
  f_number: 2.8
  full_field_mm: 6
  wavelength_nm: 550
  waves: { W040: 0.8, W131: 1.2, W222: 1.0, W220: 0.7, W311: 8 }
  colour: { axial_um: { 450: 12, 650: -5 }, lateral_um: { 450: 1.4, 650: -0.8 } }
camera:
  pixels: [4000, 3000]
  pixel_pitch_um: 2.4
  bands_nm: { red: [600, 620, 640], green: [520, 540, 560], blue: [450, 460, 470] }
`;

const ROUNDS = options.quick ? 1 : 5;
const figures = {};

console.log(
  `${cpus().length} x ${cpus()[0].model}, Node ${process.version}, 2 threads each unless said otherwise`,
);
const python = findPython();
console.log(
  python === undefined
    ? 'No Python with NumPy, SciPy and OpenCV here: our own reference engine stands in for the peer.\n'
    : `Peer: ${python} with SciPy and OpenCV.\n`,
);

compare('12 megapixels in colour, one wavelength a band', {});
compare('12 megapixels in colour, three wavelengths a band', { lines: 3 });
compare('12 megapixels in colour, tilted sensor (the peer cannot tilt: its time without)', { tiltDeg: 0.2 });
threads();
sizes();
kernels();
commands();
memory();
if (options.json !== undefined) writeFileSync(options.json, `${JSON.stringify(figures, null, 2)}\n`);

/** Ours against the peer, in turns. */
function compare(title, setup) {
  const size = options.quick ? [2000, 1500] : [4000, 3000];
  const rounds = [];
  const peerRounds = [];
  for (let round = 0; round < Math.min(3, ROUNDS); round++) {
    peerRounds.push(peer(size, setup));
    rounds.push(form({ ...setup, size, rounds: ROUNDS }));
  }
  const peerSeconds = Math.min(...peerRounds);
  const warm = median(rounds.map(({ warm: { total } }) => total));
  const cold = median(rounds.map(({ cold: { total } }) => total));
  const parts = rounds[0].warm;
  console.log(title);
  console.log(
    `  peer ${seconds(peerSeconds)}; ours warm ${seconds(warm)} (psf ${seconds(parts.psf)}, warp ${seconds(parts.warp)}, ` +
      `blur ${seconds(parts.blur)}), cold with worker start ${seconds(cold)}; bound by blending ${rounds[0].blendBound.toFixed(4)}`,
  );
  report(`${title}: peer's time over ours, warm (above 1: ours is faster)`, peerSeconds / warm);
  report(`${title}: peer's time over ours, cold (above 1: ours is faster)`, peerSeconds / cold);
}

function threads() {
  const size = options.quick ? [2000, 1500] : [4000, 3000];
  const one = [];
  const two = [];
  for (let round = 0; round < Math.min(3, ROUNDS); round++) {
    one.push(form({ size, threads: 1, rounds: ROUNDS }).warm.total);
    two.push(form({ size, threads: 2, rounds: ROUNDS }).warm.total);
  }
  report('time of one thread over time of two (above 1: two are faster)', median(one) / median(two));
}

function sizes() {
  const small = form({ size: [2000, 1500], rounds: ROUNDS }).warm.total;
  const large = form({ size: [4000, 3000], scale: 2, rounds: ROUNDS }).warm.total;
  report(
    'time for four times the pixels of the same field over time for one (4: the same a pixel)',
    large / small,
  );
}

function kernels() {
  const size = [2000, 1500];
  const small = form({ size, kernelPx: 63, rounds: ROUNDS }).warm.blur;
  const large = form({ size, kernelPx: 255, rounds: ROUNDS }).warm.blur;
  report(
    'blur with a kernel of 255 pixels over blur with one of 63, on the same picture (below 1: cheaper)',
    large / small,
  );
}

/** Whole commands against a bare start of Node. */
function commands() {
  const rig = join(folder, 'zones.rig.yaml');
  writeFileSync(rig, ZONES_RIG);
  const program = here('../../bin/foreglass.js');
  const bare = [];
  const help = [];
  const zones = [];
  for (let round = 0; round < 3 * ROUNDS; round++) {
    bare.push(timeOf(['-e', '0']));
    help.push(timeOf([program, '--help']));
    zones.push(timeOf([program, 'zones', '--rig', rig, '--json']));
  }
  report(
    "whole command 'zones' over a bare 'node -e 0' (12 is the most we allow)",
    median(zones) / median(bare),
  );
  report("'--help' over a bare 'node -e 0' (3 is the most we allow)", median(help) / median(bare));
}

function memory() {
  const peak = (setup) => form({ ...setup, rounds: 1, files: true }).peakMb;
  report('peak memory of a whole render, 12 megapixels in colour, MB', peak({ size: [4000, 3000] }));
  if (options.quick) return;
  report(
    'peak memory of a whole render, 100 megapixels mono, MB',
    peak({ size: [12500, 8000], mono: true, scale: 3.125 }),
  );
}

/** One process of ours: see form-once.js. */
function form(setup) {
  const text = execFileSync(
    process.execPath,
    [here('./form-once.js'), JSON.stringify({ folder, ...setup })],
    {
      maxBuffer: 2 ** 24,
    },
  );
  return JSON.parse(text.toString());
}

/** Seconds of the peer for one picture, psf + warp + blur, the best of its rounds in one warm process. */
function peer([width, height], { lines = 1 }) {
  if (python === undefined)
    return form({ size: [width, height], lines, engine: 'reference', rounds: 1 }).warm.total;
  const scene = join(folder, `${width}.png`);
  execFileSync(process.execPath, [
    here('./form-once.js'),
    JSON.stringify({ size: [width, height], sceneOnly: scene }),
  ]);
  const file = join(folder, 'case.json');
  const spread = (nm) => (lines === 1 ? [nm] : [nm - 20, nm, nm + 20]);
  const bands = [620, 540, 460].map(spread);
  writeFileSync(
    file,
    JSON.stringify({ ...JSON.parse(readFileSync(here('./peer/case-12mp.json'))), bands_nm: bands }),
  );
  const args = [
    here('./peer/scipy_render.py'),
    file,
    scene,
    join(folder, 'peer.npy'),
    '--workers',
    '2',
    '--repeat',
    '3',
  ];
  const env = { ...process.env };
  delete env.OPENBLAS_CORETYPE;
  delete env.OPENBLAS_L2_SIZE;
  return JSON.parse(execFileSync(python, args, { env }).toString()).total;
}

function findPython() {
  const candidates = ['/usr/bin/python3', 'python3'];
  return candidates.find((name) => spawnSync(name, ['-c', 'import numpy, scipy.fft, cv2']).status === 0);
}

function timeOf(args) {
  const start = performance.now();
  const { status } = spawnSync(process.execPath, args, { stdio: 'ignore' });
  if (status !== 0) throw new Error(`status ${status}: node ${args.join(' ')}`);
  return performance.now() - start;
}

function report(what, value) {
  figures[what] = value;
  console.log(`  ${value < 100 ? value.toFixed(2) : Math.round(value)}  ${what}`);
}

function median(values) {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)];
}

function seconds(value) {
  return `${value.toFixed(2)} s`;
}
