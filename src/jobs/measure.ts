/** `measure`: what a chart's picture shows. */
import { basename } from 'node:path';
import type { ChartTruth } from '../charts/truth.js';
import { type Fault, InputError, InterruptedError } from '../errors.js';
import { loadTruth } from '../files/load-truth.js';
import type { Picture } from '../files/pictures/index.js';
import { type BandPlane, chartDots } from '../measure/dots.js';
import { chartEdges, type EdgeSetting, regionEdge } from '../measure/edges.js';
import type { MeasureReport } from '../measure/figures.js';
import { flatField } from '../measure/flat-field.js';
import { opticalFrame } from '../measure/optical-frame.js';
import type { PixelRect } from '../measure/plane.js';
import type { Rig } from '../optics/rig.js';
import { readMeasured } from './measure-picture.js';

export type {
  DistortionFigures,
  DotFigures,
  EdgeFigures,
  Encoding,
  FlatReport,
  LateralColourFigures,
  MeasureReport,
  RadialFigures,
  SfrValue,
  Skipped,
} from '../measure/figures.js';
export type { FlatFigures } from '../measure/flat-field.js';
export type { PixelRect } from '../measure/plane.js';

export interface MeasureOptions {
  /** A picture file, or a picture in linear light. */
  image: string | Picture;
  /** The truth of the chart that it shows: a file or what `chart` returned. Its edges and discs are measured.
   */
  truth?: string | ChartTruth;
  /** Regions that one slanted edge crosses each. */
  regions?: readonly PixelRect[];
  /** Regions of even light, for noise and SNR. */
  flats?: readonly PixelRect[];
  /** Gives line pairs a mm and fields, says where distortion puts the parts of a chart, and what is to be
   * expected. */
  rig?: Rig;
  /** The record of the rendering: rig and encoding of the picture. */
  recordFile?: string;
  /** The numbers of the picture are linear light. Left out: the record or the file's own tags say, else sRGB.
   */
  linear?: boolean;
  /** Frequencies at which the SFR is given, above 0 and up to 1. Default: 0.05 to 0.5 in steps of 0.05. */
  cyclesPerPixel?: readonly number[];
  /** The same in line pairs a mm; needs a rig, a record or a truth for the pitch. */
  lpPerMm?: readonly number[];
  signal?: AbortSignal;
}

const DEFAULT_FREQUENCIES = Array.from({ length: 10 }, (_, i) => (i + 1) / 20);

/** Measure a picture.
 *
 * The response of an edge is that of lens, camera and everything behind it; a chart's own blur, the square
 * of one of its samples, is taken out where the truth is given.
 * @throws {InputError} nothing to measure; a region outside of the picture or without an edge that can be
 *   measured; a chart of which not one part can be; a picture that does not fit its truth, rig or record
 */
export async function measure(options: MeasureOptions): Promise<MeasureReport> {
  const truth = typeof options.truth === 'string' ? loadTruth(options.truth) : options.truth;
  refuseNothing(options, truth);
  const { picture, bandNames, encoding, warnings, ...recorded } = await readMeasured(options.image, options);
  if (options.signal?.aborted) throw new InterruptedError();
  const rig = options.rig ?? recorded.rig;
  refuseMisfit(picture, truth, rig);
  const bands = bandPlanes(picture, bandNames, rig, warnings);
  const frame = opticalFrame(rig, truth);
  const cyclesPerPixel = frequencies(options, frame?.pitchMm);
  const settingOf = ({ name, band }: BandPlane): EdgeSetting => ({
    rig,
    band,
    bandName: name,
    frame,
    truth,
    cyclesPerPixel,
  });
  const report: MeasureReport = {
    image: typeof options.image === 'string' ? basename(options.image) : null,
    encoding,
    pixels: [picture.width, picture.height],
    chart: truth?.chart ?? null,
    edges: [],
    dots: [],
    distortion: [],
    lateralColour: [],
    radialFit: [],
    flats: [],
    skipped: [],
    warnings,
  };
  if (truth?.edges !== undefined) {
    for (const band of bands) {
      const { edges, skipped } = chartEdges(band.plane, truth, settingOf(band));
      report.edges.push(...edges);
      report.skipped.push(...skipped);
    }
  }
  if (truth?.dots !== undefined) {
    const { skipped, ...found } = chartDots(bands, truth, rig);
    Object.assign(report, found);
    report.skipped.push(...skipped);
  }
  refuseNothingFound(report, truth);
  measureRegions(report, options, bands, settingOf);
  if (report.skipped.length > 0) report.warnings.push(skippedWarning(report));
  return report;
}

function refuseNothing({ regions = [], flats = [] }: MeasureOptions, truth: ChartTruth | undefined): void {
  if (truth === undefined && regions.length + flats.length === 0)
    throw new InputError({
      key: '--truth',
      message: 'nothing says what to measure',
      advice:
        "Name the chart's truth file (--truth FILE), or mark an edge (--region) or a flat field (--flat).",
    });
  const isSeen = truth?.edges !== undefined || truth?.dots !== undefined;
  if (truth !== undefined && !isSeen && regions.length + flats.length === 0)
    throw new InputError({
      key: '--truth',
      message: 'this kind of chart is for looking at: nothing of it is measured',
      found: truth.chart,
      allowed: 'edges, dots',
      advice: 'Mark edges in it with --region.',
    });
}

function refuseMisfit({ width, height }: Picture, truth: ChartTruth | undefined, rig: Rig | undefined): void {
  const faults: Fault[] = [];
  const check = (key: string, what: string, pixels: readonly number[]) => {
    if (pixels[0] !== width || pixels[1] !== height)
      faults.push({
        key,
        message: `the picture has not the size of ${what}`,
        found: `${width} x ${height}`,
        allowed: `${pixels[0]} x ${pixels[1]}`,
      });
  };
  if (truth !== undefined) check('--truth', "the chart's sensor", truth.pixels);
  if (rig !== undefined) check('--rig', "the rig's sensor", rig.camera.pixels);
  if (faults.length > 0) throw new InputError(faults);
}

/** The planes with the rig's bands of the same name. */
function bandPlanes(
  { width, height, planes }: Picture,
  names: readonly string[],
  rig: Rig | undefined,
  warnings: string[],
): BandPlane[] {
  const rigBands = rig?.camera.bands ?? [];
  const isSameCount = rigBands.length === planes.length;
  if (
    rig !== undefined &&
    !isSameCount &&
    !names.every((name) => rigBands.some((band) => band.name === name))
  )
    warnings.push(
      `the picture has ${planes.length} bands and the rig ${rigBands.length}: bands that the rig lacks get no figures of it.`,
    );
  return planes.map((samples, i) => {
    const band = rigBands.find(({ name }) => name === names[i]) ?? (isSameCount ? rigBands[i] : undefined);
    return { plane: { width, height, samples }, name: band?.name ?? names[i], band };
  });
}

function frequencies(
  { cyclesPerPixel, lpPerMm }: MeasureOptions,
  pitchMm: number | undefined,
): readonly number[] {
  if (lpPerMm !== undefined && pitchMm === undefined)
    throw new InputError({
      key: '--lp-per-mm',
      message: 'the pitch of the pixels is not known',
      advice: 'Name a rig (--rig FILE) or a truth file, or give --cycles-per-pixel.',
    });
  const asked = [...(cyclesPerPixel ?? []), ...(lpPerMm ?? []).map((lp) => lp * pitchMm!)];
  const chosen = asked.length === 0 ? DEFAULT_FREQUENCIES : asked;
  const wrong = chosen.filter((f) => !(f > 0 && f <= 1 + 1e-9));
  if (wrong.length > 0)
    throw new InputError(
      wrong.map((f) => ({
        key: lpPerMm === undefined ? '--cycles-per-pixel' : '--lp-per-mm',
        message: 'a frequency is out of range',
        found: `${Number(f.toPrecision(4))} cycles a pixel`,
        allowed: 'above 0, up to 1 cycle a pixel',
      })),
    );
  return chosen.toSorted((a, b) => a - b);
}

function refuseNothingFound({ edges, dots, skipped }: MeasureReport, truth: ChartTruth | undefined): void {
  if (truth === undefined || edges.length + dots.length > 0 || skipped.length === 0) return;
  const reasons = [...new Set(skipped.map(({ reason }) => reason))].slice(0, 5);
  throw new InputError(
    reasons.map((reason) => ({
      key: '--truth',
      message: `no part of the chart can be measured: ${reason.replace(/\.$/, '')}`,
    })),
  );
}

function measureRegions(
  report: MeasureReport,
  { regions = [], flats = [] }: MeasureOptions,
  bands: readonly BandPlane[],
  settingOf: (band: BandPlane) => EdgeSetting,
): void {
  const faults: Fault[] = [];
  const attempt = (option: string, region: PixelRect, run: () => void) => {
    const { x, y, width, height } = region;
    const key = `${option} ${[x, y, width, height].join(',')}`;
    try {
      refuseOutside(region, report.pixels);
      run();
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      faults.push(...error.faults.map((fault) => ({ ...fault, key })));
    }
  };
  for (const band of bands)
    for (const region of regions)
      attempt('--region', region, () => {
        report.edges.push(regionEdge(band.plane, region, settingOf(band)));
      });
  for (const region of flats)
    for (const band of bands)
      attempt('--flat', region, () => {
        report.flats.push({ region, band: band.name, ...flatField(band.plane, region) });
      });
  if (faults.length > 0) throw new InputError(withoutRepeats(faults));
}

/** The same fault in every band is said once. */
function withoutRepeats(faults: readonly Fault[]): Fault[] {
  const seen = new Map(faults.map((fault) => [JSON.stringify(fault), fault]));
  return [...seen.values()];
}

function refuseOutside({ x, y, width, height }: PixelRect, [columns, rows]: [number, number]): void {
  const isWhole = [x, y, width, height].every(Number.isInteger);
  if (isWhole && x >= 0 && y >= 0 && width > 0 && height > 0 && x + width <= columns && y + height <= rows)
    return;
  throw new InputError({
    message: 'the region is not a part of the picture',
    found: `${width} x ${height} pixels from (${x}, ${y})`,
    allowed: `whole pixels within ${columns} x ${rows}`,
  });
}

function skippedWarning({ skipped, edges, dots }: MeasureReport): string {
  const [first] = skipped;
  return (
    `${skipped.length} of ${skipped.length + edges.length + dots.length} parts of the chart could not be measured; the first, at ` +
    `(${first.x.toFixed(1)}, ${first.y.toFixed(1)}) in ${first.band}: ${first.reason}`
  );
}
