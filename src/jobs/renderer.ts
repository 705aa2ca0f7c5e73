/** Renders pictures one after another with the same worker threads. */
import { InterruptedError } from '../errors.js';
import {
  type AllocatePlanes,
  checkPicture,
  encodePicture,
  encodeRaw,
  fitToSensor,
  limitPictureThreads,
  readScene,
  sharedPlanes,
  toBands,
} from '../files/pictures/index.js';
import { resultData } from '../files/result-data.js';
import { dataText } from '../files/write-data.js';
import { type Output, writeAllWhole } from '../files/write-whole.js';
import type { Arena } from '../imaging/arena.js';
import { Crew } from '../imaging/crew.js';
import { formImage, type ImageWatch, prepareBands, refuseUnformable } from '../imaging/form-image.js';
import type { BandKernels } from '../imaging/plan-blur.js';
import type { Raster } from '../imaging/raster.js';
import { recordImage } from '../imaging/record-image.js';
import { VERSION } from '../version.js';
import { checkOutputs, type RenderOptions, type Settings, settle, settleCrew } from './render-options.js';
import {
  type RenderRecord,
  type RenderResult,
  recordedFiles,
  recordedLevels,
  warningsFor,
} from './render-record.js';
import { keepScene, sheetFile } from './render-sheet.js';

/** Renders pictures one after another. Worker threads and memory are kept from one picture to the next, and so are the PSFs while
 * lens, sensor and mount stay the same. Close it when done: until then the process does not end. */
export class Renderer {
  readonly #crew: Crew;
  /** Where the arena's stack stands with nothing of a picture in it. */
  readonly #base: number;
  /** PSFs of the last picture, at the bottom of the arena's stack. */
  #kept?: { key: string; bands: BandKernels[]; top: number };

  /** @param options `threads` and `engine` as in `RenderOptions` */
  constructor(options: Pick<RenderOptions, 'threads' | 'engine'> = {}) {
    const { threads, engine } = settleCrew(options);
    limitPictureThreads(threads);
    this.#crew = new Crew(threads, engine);
    this.#base = this.#crew.arena.mark();
  }

  /** Render a scene, as the function `render` does; one at a time. `threads` and `engine` of the options are not looked at.
   * @returns a picture of its own, and how it was made */
  async render(options: RenderOptions): Promise<RenderResult> {
    const { record, picture, raw } = await this.renderInPlace(options);
    return {
      record,
      picture: { ...picture, planes: picture.planes.map((plane) => Float32Array.from(plane)) },
      raw: raw?.map((plane) => Uint16Array.from(plane)),
    };
  }

  /** As `render`, but the picture lies in the renderer's memory, where the next one overwrites it. */
  async renderInPlace(options: RenderOptions): Promise<RenderResult> {
    const settings = settle(options);
    const { rig, oversample, sheet, seeds, signal } = settings;
    const outputs = checkOutputs(options);
    refuseUnformable(rig, oversample);
    if (signal?.aborted) throw new InterruptedError();
    const crew = this.#crew;
    const watch: ImageWatch = {
      signal,
      onProgress: (stage, done, total) => options.onProgress?.({ stage, done, total }),
    };
    const { scene, bands, seconds } = await this.#readAndPrepare(options, settings, watch);
    const kept = options.sheet === undefined ? undefined : keepScene(rig, scene, oversample);
    const formed = await formImage(crew, rig, scene.planes, oversample, bands, watch, sheet);
    const cameraStart = performance.now();
    const wantsRaw = options.raw !== undefined || options.keepRaw === true;
    const recorded = await recordImage(crew, rig.camera, formed.planes, seeds, wantsRaw, {
      signal,
      onProgress: (done, total) => options.onProgress?.({ stage: 'camera', done, total }),
    });
    const encodeStart = performance.now();
    const [width, height] = rig.camera.pixels;
    const picture: Raster = { width, height, planes: recorded.picture };
    const camera = (encodeStart - cameraStart) / 1000;
    const { warp, blur } = formed.seconds;
    const record: RenderRecord = {
      foreglass: VERSION,
      rig,
      seed: seeds.seed,
      cameraSeed: seeds.cameraSeed,
      threads: crew.threads,
      oversample,
      image: { width, height, bands: rig.camera.bands.map(({ name }) => name) },
      accuracy: formed.accuracy,
      files: recordedFiles(options),
      rawLevels: wantsRaw ? recordedLevels(recorded.levels) : undefined,
      seconds: { ...seconds, warp, blur, camera, encode: 0, total: seconds.psf + warp + blur + camera },
      warnings: [...scene.warnings, ...warningsFor(settings, formed.accuracy)],
    };
    const files: Output[] = [];
    if (options.out !== undefined && outputs.out !== undefined) {
      options.onProgress?.({ stage: 'encode', done: 0, total: 1 });
      const data = await encodePicture(picture, outputs.out, { linear: options.linear });
      files.push({ path: options.out, data });
    }
    if (options.raw !== undefined && outputs.raw !== undefined && recorded.raw !== undefined) {
      files.push({ path: options.raw, data: await encodeRaw(recorded.raw[0], width, height, outputs.raw) });
    }
    if (options.sheet !== undefined && kept !== undefined)
      files.push({ path: options.sheet, data: await sheetFile(options.sheet, rig, kept, picture) });
    record.seconds.encode = (performance.now() - encodeStart) / 1000;
    if (options.recordFile !== undefined) {
      files.push({ path: options.recordFile, data: dataText(options.recordFile, resultData(record)) });
    }
    if (signal?.aborted) throw new InterruptedError();
    await writeAllWhole(files);
    return { record, picture, raw: wantsRaw ? recorded.raw : undefined };
  }

  /** End the worker threads. */
  async close(): Promise<void> {
    await this.#crew.close();
  }

  /** Read the scene while the workers compute the PSFs. */
  async #readAndPrepare(
    options: RenderOptions,
    settings: Settings,
    watch: ImageWatch,
  ): Promise<{
    scene: Raster & { warnings: string[] };
    bands: BandKernels[];
    seconds: { decode: number; psf: number };
  }> {
    const { arena } = this.#crew;
    const start = performance.now();
    const giveUp = new AbortController();
    const signals = [giveUp.signal, ...(watch.signal === undefined ? [] : [watch.signal])];
    const preparing = this.#prepare(settings, { ...watch, signal: AbortSignal.any(signals) });
    preparing.catch(() => undefined); // waited for below
    let psf = 0;
    let decode = 0;
    const isArenaFree = preparing.then(() => {
      psf = (performance.now() - start) / 1000;
    });
    isArenaFree.catch(() => undefined);
    try {
      const scene = await readInto(arena, isArenaFree, options, settings);
      decode = Math.max(0, (performance.now() - start) / 1000 - psf);
      return { scene, bands: await preparing, seconds: { decode, psf } };
    } catch (error) {
      giveUp.abort();
      await preparing.catch(() => undefined); // the workers must be idle before anything else is asked of them
      throw error;
    }
  }

  async #prepare({ rig, oversample, tolerances }: Settings, watch: ImageWatch): Promise<BandKernels[]> {
    const { arena } = this.#crew;
    const key = opticsKey({ rig, oversample, tolerances });
    if (this.#kept?.key === key) {
      arena.release(this.#kept.top);
      return this.#kept.bands;
    }
    this.#kept = undefined;
    arena.release(this.#base);
    const bands = await prepareBands(this.#crew, rig, oversample, tolerances, watch);
    this.#kept = { key, bands, top: arena.mark() };
    return bands;
  }
}

/** All that the PSFs of a picture depend on. */
function opticsKey({
  rig,
  oversample,
  tolerances,
}: Pick<Settings, 'rig' | 'oversample' | 'tolerances'>): string {
  const { name: _name, focalLengthMm: _focal, relativeIllumination: _light, ...lens } = rig.lens;
  const { pixels, pixelPitchUm, fillFactor, bands } = rig.camera;
  const { objectScale: _scale, ...mount } = rig.mount;
  return JSON.stringify([lens, pixels, pixelPitchUm, fillFactor, bands, mount, oversample, tolerances]);
}

/** The scene in the arena: of the sensor's size times the oversampling and its margins, one plane a band.
 * @param isArenaFree resolves when nothing else reserves memory there any more; decoding does not wait for it */
async function readInto(
  arena: Arena,
  isArenaFree: Promise<unknown>,
  { scene, sceneLinear }: RenderOptions,
  { rig, sheet: { width, height } }: Settings,
): Promise<Raster & { warnings: string[] }> {
  const allocate: AllocatePlanes = (planeWidth, planeHeight, count) =>
    planeWidth === width && planeHeight === height
      ? Array.from({ length: count }, () =>
          arena.floats(arena.allocateFloats(width * height), width * height),
        )
      : sharedPlanes(planeWidth, planeHeight, count); // a picture of another size is on its way to be fitted
  const allocateWhenFree = async (...size: Parameters<AllocatePlanes>) => {
    await isArenaFree;
    return allocate(...size);
  };
  const read =
    typeof scene === 'string'
      ? await readScene(scene, { sceneLinear, allocate: allocateWhenFree })
      : { raster: await copyInto(allocateWhenFree, scene), warnings: [] };
  const bandNames = rig.camera.bands.map(({ name }) => name);
  const resized = (raster: Raster) => fitToSensor(raster, width, height, { allocate });
  // colours that the camera does not tell apart are added up before they are resized, not after
  const isFewer = read.raster.planes.length > bandNames.length;
  const bands = isFewer
    ? resized(toBands(read.raster, bandNames, { allocate }))
    : toBands(resized(read.raster), bandNames, { allocate });
  return { ...bands, warnings: read.warnings };
}

async function copyInto(
  allocate: (...size: Parameters<AllocatePlanes>) => Promise<Float32Array[]>,
  scene: Raster,
): Promise<Raster> {
  checkPicture(scene);
  const planes = await allocate(scene.width, scene.height, scene.planes.length);
  for (const [at, plane] of planes.entries()) plane.set(scene.planes[at]);
  return { ...scene, planes };
}
