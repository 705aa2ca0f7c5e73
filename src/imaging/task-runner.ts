/** What a worker does for each kind of job. */
import { developRows } from '../camera/develop.js';
import { exposeRows } from '../camera/expose.js';
import type { Arena } from './arena.js';
import { tileEdge } from './blur-grid.js';
import { blendError, blendErrorOfSpan, type TileSpan } from './certificate.js';
import { energyOutside, extentSteps } from './kernel-size.js';
import { KernelSource } from './kernel-source.js';
import { NodeKernels, slotCount } from './node-kernels.js';
import { sensorFrame } from './sensor-frame.js';
import { TileBlur } from './tile-blur.js';
import { radialTables, warpRows } from './warp.js';
import type { BandSetup, Job } from './work.js';

/** Does one task of a job and returns its number. */
export type RunTask = (task: number) => number;

/** A function that prepares a job's tasks. What several jobs need (kernel sources with their scratch) is kept between them. */
export function makeTaskRunner(arena: Arena): (job: Job) => RunTask {
  let keptSource: { key: string; source: KernelSource } | undefined;
  const sourceFor = (setup: BandSetup, kernelPx: number) => {
    const key = JSON.stringify([setup, kernelPx]);
    if (keptSource?.key !== key) {
      const { rig, bandIndex, oversample } = setup;
      keptSource = { key, source: new KernelSource(rig, rig.camera.bands[bandIndex], oversample, kernelPx) };
    }
    return keptSource.source;
  };
  return (job) => {
    switch (job.kind) {
      case 'extent':
      case 'outside': {
        const { rig, bandIndex, oversample } = job.setup;
        const band = rig.camera.bands[bandIndex];
        return (task) => {
          const [x, y] = job.places[task];
          return job.kind === 'extent'
            ? extentSteps(rig, band, oversample, x, y, job.tolerance)
            : energyOutside(rig, band, oversample, x, y, job.kernelPx);
        };
      }
      case 'spans': {
        const source = sourceFor(job.setup, job.kernelPx);
        return (task) => blendErrorOfSpan(source, job.spans[task], job.order, job.kernelPx);
      }
      case 'kernels': {
        const source = sourceFor(job.setup, job.grid.kernelPx);
        const kernels = nodeKernels(arena, job);
        return (task) => {
          source.kernelAt(...kernels.slotPosition(task), kernels.slot(task));
          return 0;
        };
      }
      case 'tiles':
        return tileChecker(sourceFor(job.setup, job.grid.kernelPx), nodeKernels(arena, job), job.tiles);
      case 'warp':
        return warper(arena, job);
      case 'expose':
      case 'develop':
        return sensorRows(arena, job);
      case 'blur': {
        const { grid } = job;
        const blur = new TileBlur(grid);
        const kernels = nodeKernels(arena, job);
        const source = arena.floats(job.sourceAt, grid.width * grid.height);
        const out = arena.floats(job.outAt, grid.width * grid.height);
        const flat = arena.floats(job.flatAt, grid.width * grid.height);
        return (task) => {
          for (let row = 0; row < grid.tilesY; row++) {
            blur.blurTile(job.columns[task], row, source, out, kernels);
            blur.blurOnes(job.columns[task], row, flat, kernels);
          }
          return 0;
        };
      }
    }
  };
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

function warper(arena: Arena, job: Extract<Job, { kind: 'warp' }>): RunTask {
  const { rig, bandIndex, oversample } = job.setup;
  const frame = sensorFrame(rig, rig.camera.bands[bandIndex], oversample);
  const tables = radialTables(rig.lens, frame);
  const scene = arena.floats(job.sceneAt, frame.width * frame.height);
  const out = arena.floats(job.outAt, frame.width * frame.height);
  return (task) => {
    const start = task * job.rowsPerTask;
    warpRows(frame, tables, scene, out, start, Math.min(frame.height, start + job.rowsPerTask));
    return 0;
  };
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
