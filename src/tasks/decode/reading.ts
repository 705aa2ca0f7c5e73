/** Tries at reading a symbol: drawn by chance, sent through lens and camera, handed to the decoder. */
import { exposureFor } from '../../camera/exposure.js';
import { simulateSensor } from '../../camera/simulate-sensor.js';
import { InputError } from '../../errors.js';
import { relativeIllumination } from '../../optics/illumination.js';
import type { Rig } from '../../optics/rig.js';
import type { Place } from '../bench.js';
import { drawSymbol } from './draw-symbol.js';
import { encodeSymbol, readSymbol, type SymbolKind } from './library.js';
import { type BlurDesk, LARGEST_BLUR, PatchBlur } from './patch-blur.js';
import { patchKernels } from './patch-kernels.js';
import { INK, moduleMap, PAPER, patchPixels, type Sheet, sheetOf } from './sheet.js';

/** What is to be read where. */
export interface ReadingSetup {
  rig: Rig;
  place: Place;
  symbol: SymbolKind;
  /** Side of a module in pixels of the ideal picture. */
  modulePx: number;
  /** Whole number from 0 to 2^53 - 1: draws texts, turns, places and noise. */
  seed: number;
}

/** `misread`: the decoder gave another text than was drawn. */
export type Outcome = 'read' | 'unread' | 'misread';

/** Samples a pixel on each side, the best first. No pixel is wrong by more than 0.02, 0.05 or 0.14 of full scale on the sharpest edges
 * (measured at f/2.8 on pixels of 5 um); the last serves modules of many pixels, which have little else than edges far apart. */
const OVERSAMPLES = [3, 2, 1] as const;

/** Room for a kernel beside the patch. */
const LEAST_KERNEL = 128;

/** Weights of the colours in grey. Source: ITU-R BT.709 (cited from memory) */
const LUMINANCE: Readonly<Record<string, number>> = { red: 0.2126, green: 0.7152, blue: 0.0722 };

/** How finely a symbol's patch is sampled.
 * @throws {InputError} for modules so large that the patch cannot be simulated */
export function patchOversample(symbol: SymbolKind, modulePx: number): number {
  const largest = Math.max(...patchPixels(symbol, modulePx));
  const room = LARGEST_BLUR - LEAST_KERNEL;
  const oversample = OVERSAMPLES.find((k) => k * largest <= room);
  if (oversample !== undefined) return oversample;
  throw new InputError({
    key: 'decode',
    message: 'the modules are too large for a symbol to be simulated',
    found: `${Number(modulePx.toPrecision(4))} px, for a patch of ${largest} px`,
    allowed: `patches of up to ${room} px`,
    advice: 'Modules of more than 10 px do not hang on the lens any more: judge edge_blur instead.',
  });
}

/** Symbols of one kind at one place. Keeps the blur between tries. */
export class Reading {
  readonly #setup: ReadingSetup;
  readonly #oversample: number;
  readonly #pixels: readonly [width: number, height: number];
  readonly #samples: readonly [width: number, height: number];
  readonly #blur: PatchBlur;
  readonly #light: number;

  /** @param desk no other reading may use it any more */
  constructor(setup: ReadingSetup, desk: BlurDesk) {
    const { rig, place, symbol, modulePx } = setup;
    this.#setup = setup;
    this.#oversample = patchOversample(symbol, modulePx);
    this.#pixels = patchPixels(symbol, modulePx);
    this.#samples = [this.#oversample * this.#pixels[0], this.#oversample * this.#pixels[1]];
    const room = LARGEST_BLUR + 1 - Math.max(...this.#samples);
    this.#blur = new PatchBlur(desk, patchKernels(rig, place, this.#oversample, room), ...this.#samples);
    this.#light = relativeIllumination(rig.lens)(Math.hypot(place.xMm, place.yMm));
  }

  /** Try the symbols `first` to `first + count - 1`. The outcome of a try depends on its own number alone. */
  async tryAll(first: number, count: number): Promise<Outcome[]> {
    const outcomes: Outcome[] = [];
    // two at a time: they share the transforms
    for (let done = 0; done < count; done += 2)
      outcomes.push(...(await this.#tryTogether(first + done, Math.min(2, count - done))));
    return outcomes;
  }

  async #tryTogether(first: number, count: number): Promise<Outcome[]> {
    const { symbol, seed } = this.#setup;
    const sheets = Array.from({ length: count }, (_, at) => sheetOf(symbol, seed, first + at));
    const scenes = await Promise.all(sheets.map((sheet) => this.#draw(sheet)));
    const blurred = this.#blur.blur(scenes);
    const outcomes: Outcome[] = [];
    for (const [at, sheet] of sheets.entries()) {
      const grey = this.#expose(blurred[at], sheet);
      const text = await readSymbol(symbol, grey, ...this.#pixels);
      outcomes.push(text === undefined ? 'unread' : text === sheet.text ? 'read' : 'misread');
    }
    return outcomes;
  }

  async #draw(sheet: Sheet): Promise<Float64Array> {
    const { rig, place, symbol, modulePx } = this.#setup;
    const modules = await encodeSymbol(symbol, sheet.text);
    const [width, height] = this.#samples;
    const samples = new Float64Array(width * height);
    const map = moduleMap(rig, place, modules, symbol, sheet, modulePx, this.#oversample);
    drawSymbol(modules, map, samples, width, height);
    return samples;
  }

  /** The camera's picture of the blurred symbol, in grey as a decoder takes it.
   * @param dark one plane a band: the share of ink at each sample */
  #expose(dark: readonly Float32Array[], { seeds }: Sheet): Uint8Array {
    const { camera } = this.#setup.rig;
    const light = dark.map((plane) => this.#lightOfPixels(plane));
    const exposure = exposureFor({ ...camera, pixels: this.#pixels }, seeds);
    const { picture } = simulateSensor(light, exposure);
    const weights = camera.bands.map(({ name }) => LUMINANCE[name] ?? 1);
    const sum = weights.reduce((total, weight) => total + weight, 0);
    const grey = new Uint8Array(picture[0].length);
    for (let i = 0; i < grey.length; i++) {
      let value = 0;
      for (let band = 0; band < weights.length; band++) value += weights[band] * picture[band][i];
      grey[i] = Math.min(255, Math.max(0, Math.round((255 * value) / sum)));
    }
    return grey;
  }

  /** The middle of a pixel lies on a sample, or with two samples a pixel half a sample after the first, where the even kernel puts it. */
  #lightOfPixels(dark: Float32Array): Float32Array {
    const [width, height] = this.#pixels;
    const k = this.#oversample;
    const middle = (k - 1) >> 1;
    const light = new Float32Array(width * height);
    for (let row = 0; row < height; row++)
      for (let column = 0; column < width; column++) {
        const share = dark[(k * row + middle) * this.#samples[0] + k * column + middle];
        light[row * width + column] = this.#light * (PAPER + (INK - PAPER) * share);
      }
    return light;
  }
}
