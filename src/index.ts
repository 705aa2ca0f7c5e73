/** The library's public face: everything that a command does can be called from code. */
export { type Fault, formatFault, InputError, InterruptedError, RunError } from './errors.js';
export { loadPrescription } from './files/load-prescription.js';
export {
  loadCameraPart,
  loadLensPart,
  loadRig,
  loadRigFile,
  parseRig,
  type RigOverrides,
} from './files/load-rig.js';
export { loadTask, parseTask, type Rule, type Task } from './files/load-task.js';
export { resultData } from './files/result-data.js';
export type { Raster } from './imaging/raster.js';
export {
  type BarTruth,
  type ChartChoices,
  type ChartKind,
  type ChartOptions,
  type ChartPlace,
  type ChartResult,
  type ChartTruth,
  type CornerTruth,
  chart,
  type DotTruth,
  type EdgeTruth,
  type Modulation,
  type SectorTruth,
} from './jobs/chart.js';
export {
  type DatasetCounts,
  type DatasetForecast,
  type DatasetOptions,
  type DatasetProgress,
  type DatasetRecord,
  dataset,
  forecastDataset,
  type MergeOptions,
  mergeDataset,
} from './jobs/dataset.js';
export { type QueueOptions, queueDataset } from './jobs/dataset-queue.js';
export { type WorkerOptions, type WorkerRecord, workOnQueue } from './jobs/dataset-worker.js';
export {
  type DeriveOptions,
  type DeriveReport,
  type DeriveResult,
  derive,
  type Prescription,
} from './jobs/derive.js';
export { deriveHtml, judgeHtml, measureHtml, sweepHtml } from './jobs/html.js';
export {
  type Advice,
  type JudgeOptions,
  type JudgeReport,
  judge,
  type PartGain,
  type RuleVerdict,
  type ZoneVerdict,
} from './jobs/judge.js';
export {
  type DistortionFigures,
  type DotFigures,
  type EdgeFigures,
  type FlatFigures,
  type FlatReport,
  type LateralColourFigures,
  type MeasureOptions,
  type MeasureReport,
  measure,
  type PixelRect,
  type RadialFigures,
  type SfrValue,
  type Skipped,
} from './jobs/measure.js';
export { type RenderOptions, type RenderRecord, type RenderResult, render } from './jobs/render.js';
export { Renderer } from './jobs/renderer.js';
export { type StartOptions, type StartRecord, start } from './jobs/start.js';
export {
  type CoefficientBudget,
  type DepthRange,
  type SweepAxis,
  type SweepOptions,
  type SweepReport,
  type SweptFigure,
  sweep,
} from './jobs/sweep.js';
export { type ZonesOptions, type ZonesReport, zones } from './jobs/zones.js';
export { zonesHtml } from './jobs/zones-html.js';
export type {
  Band,
  Camera,
  Lens,
  Mount,
  ObjectScale,
  RelativeIllumination,
  Rig,
  Sensor,
  SpectralLine,
  Waves,
} from './optics/rig.js';
export { VERSION } from './version.js';
