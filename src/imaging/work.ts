/** The pieces of work that worker threads do, as plain data that can be sent to them. */
import type { Exposure } from '../camera/exposure.js';
import type { Rig } from '../optics/rig.js';
import type { BlurGrid } from './blur-grid.js';
import type { TileSpan } from './certificate.js';
import type { SceneSheet } from './warp.js';

/** A column of tiles, and the columns whose results overlap with its own and must be there first. */
export interface TileColumn {
  column: number;
  waitFor: number[];
}

/** What does the arithmetic: the compiled kernels, or plain TypeScript in float64, which they are held against. */
export type Engine = 'simd' | 'reference';

/** Which band of which rig, on which grid of samples. */
export interface BandSetup {
  rig: Rig;
  bandIndex: number;
  oversample: number;
}

/** A kind of work with its data. A job is cut into numbered tasks; the numbers a task yields stand under its number in the result. */
export type Job =
  /** Half the side, in fine steps, of the square that holds a PSF's light; a task a place. */
  | { kind: 'extent'; setup: BandSetup; places: [number, number][]; tolerance: number }
  /** Share of the light outside the kernel; a task a place. */
  | { kind: 'outside'; setup: BandSetup; places: [number, number][]; kernelPx: number; tolerance: number }
  /** Blending error over single spans, kernels computed on the spot; a task a span. */
  | {
      kind: 'spans';
      setup: BandSetup;
      kernelPx: number;
      largestGrid: number;
      order: number;
      spans: TileSpan[];
    }
  /** Kernels of a grid's nodes into shared memory; a task a slot. */
  | {
      kind: 'kernels';
      setup: BandSetup;
      largestGrid: number;
      grid: BlurGrid;
      isMirrored: boolean;
      kernelsAt: number;
      count: number;
    }
  /** Blending error of a grid's tiles; a task a tile. */
  | {
      kind: 'tiles';
      setup: BandSetup;
      largestGrid: number;
      grid: BlurGrid;
      isMirrored: boolean;
      kernelsAt: number;
      tiles: [number, number][];
    }
  /** Warp and illumination of planes that are moved alike (of up to three bands); a task some rows. */
  | {
      kind: 'warp';
      setup: BandSetup;
      planes: { sceneAt: number; outAt: number }[];
      /** Left out: the scene is as large as the picture. */
      sheet?: SceneSheet;
      rowsPerTask: number;
      count: number;
    }
  /** Raw numbers of the sensor from the light of all bands; a task some rows. */
  | {
      kind: 'expose';
      exposure: Exposure;
      lightAt: number[];
      rawAt: number[];
      rowsPerTask: number;
      count: number;
    }
  /** The picture from the raw numbers; a task some rows. */
  | {
      kind: 'develop';
      exposure: Exposure;
      rawAt: number[];
      pictureAt: number[];
      rowsPerTask: number;
      count: number;
    }
  /** Blur of a plane, and of a plane of ones; a task a column of tiles, in turns: see `columnsInTurns`. */
  | {
      kind: 'blur';
      grid: BlurGrid;
      isMirrored: boolean;
      kernelsAt: number;
      sourceAt: number;
      outAt: number;
      flatAt: number;
      columns: TileColumn[];
      /** For each column, 1 when it is done. */
      isDone: Int32Array;
    }
  /** Planes of the grid's size set to 0; a task some rows. */
  | { kind: 'clear'; grid: BlurGrid; planes: number[]; rowsPerTask: number; count: number }
  /** Blurred picture over blurred ones; a task some rows. */
  | {
      kind: 'flatten';
      grid: BlurGrid;
      isFolded: boolean;
      outAt: number;
      flatAt: number;
      rowsPerTask: number;
      count: number;
    };

/** Number of tasks of a job. */
export function taskCount(job: Job): number {
  switch (job.kind) {
    case 'extent':
    case 'outside':
      return job.places.length;
    case 'spans':
      return job.spans.length;
    case 'tiles':
      return job.tiles.length;
    case 'blur':
      return job.columns.length;
    case 'kernels':
    case 'warp':
    case 'expose':
    case 'develop':
    case 'flatten':
    case 'clear':
      return job.count;
  }
}

/** Indices of the control block that main thread and workers share. */
export const CONTROL = { next: 0, done: 1, stop: 2, length: 3 } as const;

/** What a worker is born with. */
export interface WorkerSetup {
  memory: WebAssembly.Memory;
  /** The compiled kernels. */
  module: WebAssembly.Module;
  /** Room for the kernels' tables. */
  tablesAt: number;
}

/** What the main thread sends to a worker. */
export interface JobMessage {
  job: Job;
  count: number;
  control: Int32Array;
  results: Float64Array;
  engine: Engine;
  /** Work space of this worker. */
  scratch: { at: number; bytes: number };
}

/** What a worker answers when no task is left. */
export type JobAnswer = { ok: true } | { ok: false; message: string; isRunError: boolean };
