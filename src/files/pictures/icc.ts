/** Colour profiles inside picture files: from device values to linear sRGB.
 *
 * The picture library converts by profile, too, but not well enough for measurements: it takes 8-bit samples
 * through 8 bits, treats the 16-bit colour pictures it converts as Display P3, and passes over the profile of
 * a 16-bit grey picture. So the profiles that are plain curves and a matrix, which nearly all RGB and grey
 * profiles are, are applied here, in float.
 *
 * Source of the formats: ICC.1:2022, sections 7.2 (header), 7.3 (tag table), 10.6 (curveType), 10.18
 * (parametricCurveType) and 10.31 (XYZType); formulas of F.3 (three-component matrix-based profiles) and F.2
 * (monochrome). Cited from memory.
 */
import { srgbDecode } from '../../numeric/srgb.js';

/** From a device value 0..1 to linear light 0..1. */
export type ToneCurve = (device: number) => number;

export type ColourProfile =
  /** Device values are sRGB, for grey or RGB. */
  | { kind: 'srgb' }
  /** One curve for grey, in linear light. */
  | { kind: 'grey'; curve: ToneCurve }
  /** A curve each for red, green and blue, then a 3 x 3 matrix, row-major, to linear sRGB. */
  | { kind: 'matrix'; curves: readonly [ToneCurve, ToneCurve, ToneCurve]; toSrgb: readonly number[] }
  /** Something that needs more than curves and a matrix. */
  | { kind: 'other' }
  /** No profile for grey or RGB values, or none at all. */
  | { kind: 'broken' };

/** From XYZ under D50, which profiles are written in, to linear sRGB (Bradford-adapted), row-major.
 * Source: B. Lindbloom, "RGB/XYZ Matrices" (from memory). */
export const XYZ_D50_TO_SRGB: readonly number[] = [
  3.1338561, -1.6168667, -0.4906146, -0.9787684, 1.9161415, 0.033454, 0.0719453, -0.2289914, 1.4052427,
];

/** A profile this near to sRGB is sRGB, written down by somebody who rounded otherwise. It is a quarter of an
 * 8-bit step. */
const SRGB_TOLERANCE = 1e-3;

/** Read a profile. */
export function parseProfile(bytes: Uint8Array): ColourProfile {
  try {
    return new ProfileReader(bytes).read();
  } catch {
    return { kind: 'broken' }; // offsets that lead out of the bytes
  }
}

class ProfileReader {
  readonly #view: DataView;

  constructor(bytes: Uint8Array) {
    this.#view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  }

  read(): ColourProfile {
    const space = this.#word(16);
    if (this.#word(36) !== 'acsp' || (space !== 'GRAY' && space !== 'RGB ')) return { kind: 'broken' };
    // a connection space of Lab puts L* where linear light is expected
    if (this.#word(20) !== 'XYZ ') return { kind: 'other' };
    return space === 'GRAY' ? this.#grey() : this.#matrix();
  }

  #grey(): ColourProfile {
    const curve = this.#curve('kTRC');
    if (curve === undefined) return { kind: 'other' };
    return isSrgbCurve(curve) ? { kind: 'srgb' } : { kind: 'grey', curve };
  }

  #matrix(): ColourProfile {
    const curves = ['rTRC', 'gTRC', 'bTRC'].map((tag) => this.#curve(tag));
    const columns = ['rXYZ', 'gXYZ', 'bXYZ'].map((tag) => this.#xyz(tag));
    const [red, green, blue] = curves;
    if (red === undefined || green === undefined || blue === undefined) return { kind: 'other' };
    const toSrgb: number[] = [];
    for (let row = 0; row < 3; row++) {
      for (const column of columns) {
        if (column === undefined) return { kind: 'other' };
        toSrgb.push(column.reduce((sum, value, k) => sum + XYZ_D50_TO_SRGB[3 * row + k] * value, 0));
      }
    }
    const isSrgbMatrix = toSrgb.every(
      (value, at) => Math.abs(value - (at % 4 === 0 ? 1 : 0)) < SRGB_TOLERANCE,
    );
    if (isSrgbMatrix && isSrgbCurve(red) && isSrgbCurve(green) && isSrgbCurve(blue)) return { kind: 'srgb' };
    return { kind: 'matrix', curves: [red, green, blue], toSrgb };
  }

  /** Offset of a tag's data, or undefined where there is no such tag. */
  #tag(signature: string): number | undefined {
    const count = this.#view.getUint32(128);
    for (let at = 132; at < 132 + 12 * count; at += 12) {
      if (this.#word(at) === signature) return this.#view.getUint32(at + 4);
    }
    return undefined;
  }

  #xyz(signature: string): number[] | undefined {
    const at = this.#tag(signature);
    if (at === undefined || this.#word(at) !== 'XYZ ') return undefined;
    return [0, 1, 2].map((k) => this.#fixed(at + 8 + 4 * k));
  }

  #curve(signature: string): ToneCurve | undefined {
    const at = this.#tag(signature);
    if (at === undefined) return undefined;
    if (this.#word(at) === 'curv') return this.#sampledCurve(at);
    if (this.#word(at) === 'para') return this.#parametricCurve(at);
    return undefined;
  }

  #sampledCurve(at: number): ToneCurve {
    const count = this.#view.getUint32(at + 8);
    if (count === 0) return (x) => x;
    if (count === 1) {
      const gamma = this.#view.getUint16(at + 12) / 256;
      return (x) => x ** gamma;
    }
    const table = Float64Array.from(
      { length: count },
      (_, k) => this.#view.getUint16(at + 12 + 2 * k) / 65535,
    );
    return (x) => {
      const place = Math.min(Math.max(x, 0), 1) * (count - 1);
      const left = Math.min(Math.floor(place), count - 2);
      return table[left] + (place - left) * (table[left + 1] - table[left]);
    };
  }

  #parametricCurve(at: number): ToneCurve | undefined {
    const type = this.#view.getUint16(at + 8);
    const parameters = PARAMETERS_OF_TYPE[type];
    if (parameters === undefined) return undefined;
    const [g, a = 1, b = 0, c = 0, d = 0, e = 0, f = 0] = Array.from({ length: parameters }, (_, k) =>
      this.#fixed(at + 12 + 4 * k),
    );
    switch (type) {
      case 0:
        return (x) => x ** g;
      case 1:
        return (x) => (x >= -b / a ? (a * x + b) ** g : 0);
      case 2:
        return (x) => (x >= -b / a ? (a * x + b) ** g + c : c);
      case 3:
        return (x) => (x >= d ? (a * x + b) ** g : c * x);
      default:
        return (x) => (x >= d ? (a * x + b) ** g + e : c * x + f);
    }
  }

  #word(at: number): string {
    return String.fromCharCode(...[0, 1, 2, 3].map((k) => this.#view.getUint8(at + k)));
  }

  /** s15Fixed16Number. */
  #fixed(at: number): number {
    return this.#view.getInt32(at) / 65536;
  }
}

/** Number of parameters of each function type of a parametric curve. */
const PARAMETERS_OF_TYPE: readonly number[] = [1, 3, 4, 5, 7];

function isSrgbCurve(curve: ToneCurve): boolean {
  for (let k = 0; k <= 256; k++) {
    if (!(Math.abs(curve(k / 256) - srgbDecode(k / 256)) < SRGB_TOLERANCE)) return false;
  }
  return true;
}
