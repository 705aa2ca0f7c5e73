/** What a data set is made from: the recipe with its rigs, scenes and labels, read and checked. */
import { readdirSync } from 'node:fs';
import { basename, dirname, extname, join, relative } from 'node:path';
import { type Fault, InputError } from '../errors.js';
import { type LabelledScene, loadLabels, type SceneLabels } from '../files/load-labels.js';
import { loadRecipe, type Recipe } from '../files/load-recipe.js';
import { loadRigFile } from '../files/load-rig.js';
import { PICTURE_EXTENSIONS, pictureSize } from '../files/pictures/index.js';
import { resultData } from '../files/result-data.js';
import { refuseUnformable } from '../imaging/form-image.js';
import type { Rig } from '../optics/rig.js';
import { VERSION } from '../version.js';
import { fileChecksum, forEachFew, sha256 } from './checksum.js';
import { extremes, isOutOfReach } from './distribution.js';
import { Drawing } from './draws.js';
import { type RigBase, rigWith } from './rig-values.js';

/** A scene of a recipe. */
export interface SceneFile extends LabelledScene {
  /** As it opens from the working folder. */
  path: string;
}

/** Everything that a picture needs, as plain data: it can be sent to another thread. */
export interface DatasetPlan {
  recipe: Recipe;
  rigs: readonly RigBase[];
  scenes: readonly SceneFile[];
  categories: SceneLabels['categories'];
  /** What the pictures depend on, in the names of the files: another recipe has another one. */
  madeFrom: MadeFrom;
  warnings: readonly string[];
}

/** What a data set was made from, apart from the number of pictures. Names are relative to the recipe's folder, so that the same recipe says
 * the same on every machine. */
export interface MadeFrom {
  foreglass: string;
  recipe: unknown;
  rigs: { file: string; rig: unknown }[];
  scenes: { file: string; bytes: number; sha256: string }[];
  /** Checksum of what the labels file says of the scenes. */
  labels?: string;
}

/** How many scenes are looked at at the same time. */
const FEW = 8;

/** Read a recipe with all that it names.
 * @throws {InputError} every fault of the recipe, its rigs, its labels and its scenes */
export async function planDataset(recipePath: string): Promise<DatasetPlan> {
  const recipe = loadRecipe(recipePath);
  const rigs = recipe.rigs.map((path) => ({ path, file: loadRigFile(path) }));
  const labels = recipe.scenes.labels === undefined ? undefined : loadLabels(recipe.scenes.labels);
  const warnings: string[] = [];
  const listed = labels === undefined ? picturesIn(recipe.scenes.images) : labels.scenes;
  if (labels !== undefined) {
    const known = new Set(listed.map(({ file }) => file));
    const unknown = picturesIn(recipe.scenes.images).filter(({ file }) => !known.has(file));
    if (unknown.length > 0)
      warnings.push(
        `${recipe.scenes.images}: ${countOf(unknown.length, 'picture is', 'pictures are')} not in the labels and left out`,
      );
  }
  if (listed.length === 0) {
    throw new InputError({
      file: recipe.scenes.images,
      message: 'holds no scene',
      allowed: PICTURE_EXTENSIONS.join(', '),
    });
  }
  const named = listed
    .map((scene) => ({ ...scene, path: join(recipe.scenes.images, scene.file) }))
    .sort((a, b) => (a.file < b.file ? -1 : 1));
  const { scenes, checksums } = await lookAtScenes(named, labels !== undefined);
  checkRigs(recipe, rigs);
  new Drawing(recipe, scenes.length); // refuses shares without scenes
  const here = dirname(recipePath);
  return {
    recipe,
    rigs,
    scenes,
    categories: labels?.categories ?? [],
    warnings,
    madeFrom: {
      foreglass: VERSION,
      recipe: recipeData(recipe, here),
      rigs: rigs.map(({ path, file }) => ({ file: relative(here, path), rig: file })),
      scenes: scenes.map(({ file }, at) => ({ file, ...checksums[at] })),
      labels: labels && sha256(JSON.stringify([labels.categories, scenes.map((scene) => scene.labels)])),
    },
  };
}

function picturesIn(folder: string): LabelledScene[] {
  return readdirSync(folder)
    .filter((name) => PICTURE_EXTENSIONS.includes(extname(name).toLowerCase()))
    .map((file) => ({ file, width: 0, height: 0, labels: [] }));
}

/** Sizes and checksums of the scenes; sizes are held against those of the labels. */
async function lookAtScenes(
  scenes: readonly SceneFile[],
  areSized: boolean,
): Promise<{ scenes: SceneFile[]; checksums: { bytes: number; sha256: string }[] }> {
  const faults: Fault[] = [];
  const found: SceneFile[] = [];
  const checksums: { bytes: number; sha256: string }[] = [];
  await forEachFew(scenes, FEW, async (scene, at) => {
    try {
      const { width, height } = await pictureSize(scene.path);
      if (areSized && (width !== scene.width || height !== scene.height)) {
        faults.push({
          file: scene.path,
          message: 'has not the size that its labels are for',
          found: `${width} x ${height}`,
          allowed: `${scene.width} x ${scene.height}`,
        });
      }
      found[at] = { ...scene, width, height };
      checksums[at] = await fileChecksum(scene.path);
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      faults.push(...error.faults);
    }
  });
  if (faults.length > 0) throw new InputError(faults);
  return { scenes: found, checksums };
}

/** The recipe in the names of its file, with every default filled in, without the number of pictures. */
function recipeData(recipe: Recipe, here: string): unknown {
  const { count: _count, rigs: _rigs, scenes, vary, correlated, placement, ...rest } = recipe;
  return {
    ...(resultData(rest) as object),
    scenes: {
      images: relative(here, scenes.images),
      labels: scenes.labels === undefined ? undefined : basename(scenes.labels),
      order: scenes.order,
      linear: scenes.isLinear,
    },
    vary: Object.fromEntries(vary.map(({ key, distribution }) => [key, distribution])),
    correlated,
    placement: { ...(resultData(placement) as object), scale: placement.scale },
  };
}

/** Refuse, before any work, a recipe whose values make no rig at the ends of one of its distributions, or whose window does not fit the
 * sensor. What several keys do together is seen picture by picture, and drawn anew. */
function checkRigs(recipe: Recipe, rigs: readonly RigBase[]): void {
  const faults: Fault[] = [];
  for (const { key, distribution } of recipe.vary) {
    if (!isOutOfReach(distribution)) continue;
    faults.push({ key: `vary.${key}.within`, message: 'is too far from the mean for any value to be drawn' });
  }
  for (const base of rigs) {
    const nominal = attempt(() => rigWith(base, []), base, '', faults);
    if (nominal !== undefined) {
      attempt(() => checkWindow(recipe, nominal), base, '', faults);
      if (recipe.output.picture === 'raw') attempt(() => refuseRawColours(nominal), base, '', faults);
    }
    for (const { key, distribution } of recipe.vary) {
      const isOpen = distribution.kind === 'normal' && distribution.within === undefined;
      const advice = isOpen ? 'State the limits of the distribution: within: [lowest, highest].' : undefined;
      for (const value of new Set(extremes(distribution))) {
        const about = `vary.${key}: at ${value}: `;
        const rig = attempt(() => rigWith(base, [{ key, value }]), base, about, faults, advice);
        if (rig !== undefined)
          attempt(() => refuseUnformable(rig, recipe.accuracy.oversample), base, about, faults, advice);
      }
    }
  }
  if (faults.length > 0) throw new InputError(faults);
}

function attempt<Result>(
  run: () => Result,
  base: RigBase,
  about: string,
  faults: Fault[],
  advice?: string,
): Result | undefined {
  try {
    return run();
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    faults.push(
      ...error.faults.map((fault) => ({
        ...fault,
        file: fault.file ?? base.path,
        key: `${about}${fault.key ?? ''}`,
        advice: advice ?? fault.advice,
      })),
    );
    return undefined;
  }
}

function checkWindow({ output: { size, window } }: Recipe, { camera: { pixels, mosaic } }: Rig): void {
  const faults: Fault[] = [];
  const [width, height] = size ?? pixels;
  if (width > pixels[0] || height > pixels[1]) {
    faults.push({
      key: 'output.size',
      message: 'is larger than the sensor',
      found: `${width} x ${height}`,
      allowed: `up to ${pixels[0]} x ${pixels[1]}`,
    });
  } else if (typeof window !== 'string') {
    const [x, y] = window;
    if (x + width > pixels[0] || y + height > pixels[1]) {
      faults.push({
        key: 'output.window',
        message: 'lets the picture end outside of the sensor',
        found: `[${x}, ${y}]`,
        allowed: `up to [${pixels[0] - width}, ${pixels[1] - height}]`,
      });
    }
    if (mosaic !== 'none' && (x % 2 !== 0 || y % 2 !== 0)) {
      faults.push({
        key: 'output.window',
        message: 'begins with another colour of the mosaic than the sensor',
        found: `[${x}, ${y}]`,
        allowed: 'even numbers',
      });
    }
  }
  if (faults.length > 0) throw new InputError(faults);
}

function refuseRawColours({ camera }: Rig): void {
  if (camera.mosaic !== 'none' || camera.bands.length === 1) return;
  throw new InputError({
    key: 'output.picture',
    message: 'a sensor that sees several bands at every pixel has no single raw picture',
    found: 'raw, with camera.mosaic: none',
    allowed: 'developed, linear, or a camera with a mosaic or one band',
  });
}

function countOf(count: number, one: string, many: string): string {
  return `${count} ${count === 1 ? one : many}`;
}
