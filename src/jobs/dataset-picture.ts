/** One picture of a data set: drawn, rendered, labelled, written. */
import { join } from 'node:path';
import { sha256 } from '../dataset/checksum.js';
import { type Draw, Drawing } from '../dataset/draws.js';
import { type PictureEntry, truthOf } from '../dataset/entry.js';
import { placeScene } from '../dataset/place-scene.js';
import type { DatasetPlan } from '../dataset/plan.js';
import { rigWith } from '../dataset/rig-values.js';
import { rigOfFrame, type View, viewOf } from '../dataset/view.js';
import { InputError } from '../errors.js';
import { encodePicture, encodeRaw, readScene, toBands } from '../files/pictures/index.js';
import { writeWhole } from '../files/write-whole.js';
import { refuseUnformable } from '../imaging/form-image.js';
import type { Raster } from '../imaging/raster.js';
import type { Rig } from '../optics/rig.js';
import type { RenderOptions } from './render-options.js';
import type { RenderResult } from './render-record.js';
import { Renderer } from './renderer.js';

/** The folder of pictures in that of the data set. */
export const IMAGES = 'images';

/** Values are drawn anew so often at most. */
const MOST_DRAWS = 100;

/** Decoded scenes are kept up to this size in all. */
const KEPT_BYTES = 192 * 2 ** 20;

/** A picture in its format. */
export interface MadePicture {
  data: Buffer;
  entry: PictureEntry;
}

/** Makes the pictures of a data set, one at a time, with one thread beside its own. Close it when done. */
export class PictureMaker {
  readonly #plan: DatasetPlan;
  readonly #drawing: Drawing;
  readonly #renderer: Renderer;
  readonly #scenes = new KeptScenes();

  constructor(plan: DatasetPlan) {
    this.#plan = plan;
    this.#drawing = new Drawing(plan.recipe, plan.scenes.length);
    this.#renderer = new Renderer({ threads: 1 });
  }

  /** @param picture  from 0
   * @throws {InputError} a scene that cannot be read; values that never make a rig that works */
  async make(picture: number): Promise<MadePicture> {
    const { recipe, scenes } = this.#plan;
    const { accuracy, output } = recipe;
    const drawn = this.#draw(picture);
    const { rig, view, draw } = drawn;
    const scene = scenes[draw.scene];
    const bandNames = rig.camera.bands.map(({ name }) => name);
    const { raster, warnings } = await this.#scenes.read(scene.path, recipe.scenes.isLinear, bandNames);
    const result = await this.#renderer.renderInPlace({
      rig: rigOfFrame(rig, view.frame),
      scene: placeScene(raster, view.pose, view.sheet, accuracy.oversample),
      sceneMargin: marginOf(view, accuracy.oversample),
      oversample: accuracy.oversample,
      tolerance: accuracy.tolerance,
      kernelTolerance: accuracy.kernelTolerance,
      seed: draw.seed,
      cameraSeed: draw.cameraSeed,
      keepRaw: output.picture === 'raw',
    });
    const data = await encoded(result, view, output);
    const { blendBound, energyOutsideKernel } = result.record.accuracy;
    const levels = result.record.rawLevels;
    const entry: PictureEntry = {
      ...truthOf(this.#plan, picture, drawn),
      width: view.window.width,
      height: view.window.height,
      bytes: data.length,
      sha256: sha256(data),
      accuracy: { blend_bound: blendBound, energy_outside_kernel: energyOutsideKernel },
      warnings: [...warnings, ...result.record.warnings],
    };
    if (levels !== undefined) {
      entry.raw_levels = {
        black_level: levels.blackLevel,
        white_level: levels.whiteLevel,
        scene_white: levels.sceneWhite,
        gain_dn_per_e: levels.gainDnPerE,
      };
    }
    return { data, entry };
  }

  /** Make a picture and write it, whole or not at all.
   * @param folder  of the data set; its folder of images is there
   * @throws as `make`; {RunError} the disk is full or fails */
  async write(picture: number, folder: string): Promise<PictureEntry> {
    const { data, entry } = await this.make(picture);
    await writeWhole(join(folder, IMAGES, entry.file), data);
    return entry;
  }

  async close(): Promise<void> {
    await this.#renderer.close();
  }

  /** Draw until there is a rig whose picture can be formed. */
  #draw(picture: number): { draw: Draw; redrawn: number; rig: Rig; view: View } {
    const { recipe, rigs, scenes } = this.#plan;
    let refusal: InputError | undefined;
    for (let redrawn = 0; redrawn < MOST_DRAWS; redrawn++) {
      const draw = this.#drawing.draw(picture, redrawn);
      try {
        const rig = rigWith(rigs[draw.rig], draw.values);
        const view = viewOf(recipe, draw, rig, scenes[draw.scene]);
        refuseUnformable(rigOfFrame(rig, view.frame), recipe.accuracy.oversample);
        return { draw, redrawn, rig, view };
      } catch (error) {
        if (!(error instanceof InputError)) throw error;
        refusal ??= error;
      }
    }
    throw new InputError(
      refusal!.faults.map((fault) => ({
        ...fault,
        message: `picture ${picture + 1}: no rig that works in ${MOST_DRAWS} draws; the first: ${fault.message}`,
      })),
    );
  }
}

/** Samples of the scene beyond the frame. */
function marginOf({ sheet, frame }: View, oversample: number): RenderOptions['sceneMargin'] {
  return {
    left: oversample * (frame.x - sheet.x),
    top: oversample * (frame.y - sheet.y),
    right: oversample * (sheet.x + sheet.width - frame.x - frame.width),
    bottom: oversample * (sheet.y + sheet.height - frame.y - frame.height),
  };
}

async function encoded(
  { picture, raw }: RenderResult,
  { window, frame }: View,
  { format, picture: kind, quality }: DatasetPlan['recipe']['output'],
): Promise<Buffer> {
  const { width, height } = window;
  const from = (window.y - frame.y) * frame.width + (window.x - frame.x);
  const isWhole = width === frame.width && height === frame.height;
  const cut = <Plane extends Float32Array | Uint16Array>(plane: Plane, makePlane: () => Plane): Plane => {
    if (isWhole) return plane;
    const out = makePlane();
    for (let row = 0; row < height; row++) {
      const start = from + row * frame.width;
      out.set(plane.subarray(start, start + width), row * width);
    }
    return out;
  };
  if (kind === 'raw')
    return encodeRaw(
      cut(raw![0], () => new Uint16Array(width * height)),
      width,
      height,
      format,
    );
  const planes = picture.planes.map((plane) => cut(plane, () => new Float32Array(width * height)));
  return encodePicture({ width, height, planes }, format, { linear: kind === 'linear', quality });
}

interface ReadScene {
  raster: Raster;
  warnings: string[];
}

/** Decoded scenes, the latest of them kept. */
class KeptScenes {
  readonly #kept = new Map<string, ReadScene>();
  #bytes = 0;

  /** Planes a band, or those of the scene where the camera has as many or more. */
  async read(path: string, sceneLinear: boolean, bandNames: readonly string[]): Promise<ReadScene> {
    const key = JSON.stringify([path, bandNames]);
    const kept = this.#kept.get(key);
    if (kept !== undefined) {
      this.#kept.delete(key); // to the end of the line
      this.#kept.set(key, kept);
      return kept;
    }
    const { raster, warnings } = await readScene(path, { sceneLinear });
    // colours that the camera does not tell apart are added up before they are resized, as in a rendering
    const isFewer = raster.planes.length > bandNames.length;
    const scene = { raster: isFewer ? toBands(raster, bandNames) : raster, warnings };
    this.#kept.set(key, scene);
    this.#bytes += bytesOf(scene);
    for (const [oldest, other] of this.#kept) {
      if (this.#bytes <= KEPT_BYTES || other === scene) break;
      this.#kept.delete(oldest);
      this.#bytes -= bytesOf(other);
    }
    return scene;
  }
}

function bytesOf({ raster }: ReadScene): number {
  return 4 * raster.width * raster.height * raster.planes.length;
}
