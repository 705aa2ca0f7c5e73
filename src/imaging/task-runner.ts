/** What a worker does for each kind of job. */
import { developRows } from '../camera/develop.js';
import { exposeRows } from '../camera/expose.js';
import { WARP_REQUEST_BYTES, writeWarpRequest } from '../numeric/kernel-requests.js';
import { type Kernels, LARGEST_KERNEL_FFT } from '../numeric/kernels.js';
import { energyBySquareRing, KernelMaker } from '../optics/psf.js';
import type { Arena } from './arena.js';
import { tileEdge } from './blur-grid.js';
import { blendError, blendErrorOfSpan, type TileSpan } from './certificate.js';
import { energyOutside, extentSteps } from './kernel-size.js';
import { KernelSource, kernelSampling } from './kernel-source.js';
import { NodeKernels, slotCount } from './node-kernels.js';
import type { Scratch } from './scratch.js';
import { sensorFrame } from './sensor-frame.js';
import { SimdBlur } from './simd-blur.js';
import { SimdKernelMaker, SimdRings } from './simd-psf.js';
import { TileBlur } from './tile-blur.js';
import { radialTables, warpRows } from './warp.js';
import type { BandSetup, Engine, Job } from './work.js';

/** Does one task of a job and returns its number. */
export type RunTask = (task: number) => number;

/** What a worker works with. */
export interface Bench {
  arena: Arena;
  kernels: Kernels;
  engine: Engine;
  /** Work space for this job. */
  scratch: Scratch;
  /** Whether the run was stopped. */
  isStopped: () => boolean;
}

/** Prepare a job's tasks. */
export function taskRunner(bench: Bench, job: Job): RunTask {
  const { arena } = bench;
  switch (job.kind) {
    case 'extent':
    case 'outside': {
      const { rig, bandIndex, oversample } = job.setup;
      const ringsOf =
        bench.engine === 'simd' ? new SimdRings(bench.kernels, bench.scratch).rings : energyBySquareRing;
      return (task) => {
        const [x, y] = job.places[task];
        const band = rig.camera.bands[bandIndex];
        return job.kind === 'extent'
          ? extentSteps(ringsOf, rig, band, oversample, x, y, job.tolerance)
          : energyOutside(ringsOf, rig, band, oversample, x, y, job.kernelPx, job.tolerance);
      };
    }
    case 'spans': {
      const source = kernelSource(bench, job.setup, job.kernelPx, job.largestGrid);
      return (task) => blendErrorOfSpan(source, job.spans[task], job.order, job.kernelPx);
    }
    case 'kernels': {
      const source = kernelSource(bench, job.setup, job.grid.kernelPx, job.largestGrid);
      const kernels = nodeKernels(arena, job);
      return (task) => {
        source.kernelAt(...kernels.slotPosition(task), kernels.slot(task));
        return 0;
      };
    }
    case 'tiles': {
      const source = kernelSource(bench, job.setup, job.grid.kernelPx, job.largestGrid);
      return tileChecker(source, nodeKernels(arena, job), job.tiles);
    }
    case 'warp':
      return warper(bench, job);
    case 'expose':
    case 'develop':
      return sensorRows(arena, job);
    case 'blur':
      return blurrer(bench, job);
    case 'clear':
      return clearer(bench, job);
    case 'flatten':
      return flattener(bench, job);
  }
}

function kernelSource(
  { engine, kernels, scratch }: Bench,
  { rig, bandIndex, oversample }: BandSetup,
  kernelPx: number,
  largestGrid: number,
): KernelSource {
  const sampling = kernelSampling(rig, oversample, kernelPx);
  const maker =
    engine === 'simd' && largestGrid <= LARGEST_KERNEL_FFT
      ? new SimdKernelMaker(kernels, scratch, sampling, largestGrid)
      : new KernelMaker(sampling);
  return new KernelSource(rig, rig.camera.bands[bandIndex], oversample, maker);
}

function nodeKernels(arena: Arena, job: Extract<Job, { kernelsAt: number }>): NodeKernels {
  const { grid, isMirrored, kernelsAt } = job;
  const floats = slotCount(grid, isMirrored) * grid.kernelPx ** 2;
  return new NodeKernels(grid, isMirrored, arena.floats(kernelsAt, floats));
}

function tileChecker(source: KernelSource, kernels: NodeKernels, tiles: [number, number][]): RunTask {
  const { grid } = kernels;
  const { originX, originY, tilePx, order, width, height } = grid;
  const exact = new Float32Array(grid.kernelPx ** 2);
  return (task) => {
    const [tileX, tileY] = tiles[task];
    const span: TileSpan = {
      nearX: tileEdge(tileX, originX, tilePx, width),
      farX: tileEdge(tileX + 1, originX, tilePx, width),
      nearY: tileEdge(tileY, originY, tilePx, height),
      farY: tileEdge(tileY + 1, originY, tilePx, height),
    };
    const nodes: Float32Array[] = [];
    for (let j = 0; j <= order; j++) {
      for (let i = 0; i <= order; i++) nodes.push(kernels.kernel(tileX * order + i, tileY * order + j));
    }
    return blendError(source, span, order, nodes, exact);
  };
}

function warper({ arena, engine, kernels, scratch }: Bench, job: Extract<Job, { kind: 'warp' }>): RunTask {
  const { rig, bandIndex, oversample } = job.setup;
  const frame = sensorFrame(rig, rig.camera.bands[bandIndex], oversample);
  const tables = radialTables(rig.lens, frame);
  const { width, height } = frame;
  const sheet = job.sheet ?? { width, height, left: 0, top: 0 };
  const warp = engine === 'simd' ? simdWarp() : referenceWarp();
  return (task) => {
    const start = task * job.rowsPerTask;
    const end = Math.min(height, start + job.rowsPerTask);
    warp(start, end);
    return 0;
  };

  function referenceWarp(): (start: number, end: number) => void {
    const planes = job.planes.map(({ sceneAt, outAt }) => ({
      scene: arena.floats(sceneAt, sheet.width * sheet.height),
      out: arena.floats(outAt, width * height),
    }));
    return (start, end) => {
      for (const { scene, out } of planes) warpRows(frame, tables, scene, out, start, end, sheet);
    };
  }

  function simdWarp(): (start: number, end: number) => void {
    const request = scratch.allocate(WARP_REQUEST_BYTES);
    const { axisX, axisY } = frame;
    writeWarpRequest(arena.memory, request, {
      width,
      height,
      sceneWidth: sheet.width,
      sceneHeight: sheet.height,
      axisX,
      axisY,
      sceneAxisX: axisX + sheet.left,
      sceneAxisY: axisY + sheet.top,
      stepsPerSquare: tables.stepsPerSquare,
      scale: scratch.doubles(tables.scale),
      illumination: scratch.doubles(tables.illumination),
      planes: job.planes,
    });
    return (start, end) => {
      if (tables.isIdentity) kernels.lightRows(request, start, end);
      else kernels.warpRows(request, start, end);
    };
  }
}

function sensorRows(arena: Arena, job: Extract<Job, { kind: 'expose' | 'develop' }>): RunTask {
  const { exposure, rowsPerTask } = job;
  const pixels = exposure.width * exposure.height;
  const raw = job.rawAt.map((address) => arena.shorts(address, pixels));
  const planes = (job.kind === 'expose' ? job.lightAt : job.pictureAt).map((address) =>
    arena.floats(address, pixels),
  );
  return (task) => {
    const start = task * rowsPerTask;
    const end = Math.min(exposure.height, start + rowsPerTask);
    if (job.kind === 'expose') exposeRows(planes, exposure, start, end, raw);
    else developRows(raw, exposure, start, end, planes);
    return 0;
  };
}

function blurrer(bench: Bench, job: Extract<Job, { kind: 'blur' }>): RunTask {
  const { columns, isDone } = job;
  const blurColumn = columnBlur(bench, job);
  return (task) => {
    const { column, waitFor } = columns[task];
    // columns that this one waits for stand earlier in the list, so some worker is at them
    for (const other of waitFor) {
      while (Atomics.load(isDone, other) === 0) {
        if (bench.isStopped()) return 0;
        Atomics.wait(isDone, other, 0, STOP_CHECK_MS);
      }
    }
    blurColumn(column);
    Atomics.store(isDone, column, 1);
    Atomics.notify(isDone, column);
    return 0;
  };
}

/** How often a waiting worker looks whether the run was stopped. */
const STOP_CHECK_MS = 50;

function columnBlur(
  { arena, engine, kernels, scratch }: Bench,
  job: Extract<Job, { kind: 'blur' }>,
): (column: number) => void {
  const { grid } = job;
  const nodes = nodeKernels(arena, job);
  if (engine === 'simd') {
    const blur = new SimdBlur(kernels, scratch, nodes, job);
    return (column) => blur.blurColumn(column);
  }
  const blur = new TileBlur(grid);
  const samples = grid.width * grid.height;
  const source = arena.floats(job.sourceAt, samples);
  const out = arena.floats(job.outAt, samples);
  const flat = arena.floats(job.flatAt, samples);
  return (column) => {
    for (let row = 0; row < grid.tilesY; row++) {
      blur.blurTile(column, row, source, out, nodes);
      blur.blurOnes(column, row, flat, nodes);
    }
  };
}

function clearer({ kernels }: Bench, job: Extract<Job, { kind: 'clear' }>): RunTask {
  const { width, height } = job.grid;
  return (task) => {
    const start = task * job.rowsPerTask;
    const rows = Math.min(job.rowsPerTask, height - start);
    for (const plane of job.planes) kernels.clear(plane + 4 * width * start, 4 * width * rows);
    return 0;
  };
}

function flattener({ kernels }: Bench, job: Extract<Job, { kind: 'flatten' }>): RunTask {
  const { width, height } = job.grid;
  const stride = 4 * width;
  return (task) => {
    const end = Math.min(height, (task + 1) * job.rowsPerTask);
    for (let row = task * job.rowsPerTask; row < end; row++) {
      const out = job.outAt + row * stride;
      const flat = job.flatAt + row * stride;
      const opposite = job.flatAt + (height - 1 - row) * stride;
      if (job.isFolded) kernels.divideMirroredRow(out, flat, opposite, width);
      else kernels.divideRow(out, flat, width);
    }
    return 0;
  };
}
