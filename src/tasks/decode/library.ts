/** The decoder and encoder of machine-readable symbols. The only place that imports zxing-wasm. */
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';

/** Kinds of symbols that a task may name. */
export type SymbolKind = 'qr' | 'data_matrix' | 'code_128';

/** A symbol without its quiet zone. */
export interface SymbolModules {
  /** In modules. A linear symbol has one row, to be stretched. */
  width: number;
  height: number;
  /** 1 where a module is dark, row-major. */
  dark: Uint8Array;
}

const FORMATS = { qr: 'QRCode', data_matrix: 'DataMatrix', code_128: 'Code128' } as const;

/** QR with error correction level M (about 15 % of the code words); Data Matrix square, ECC 200. */
const WRITING = { qr: 'ecLevel=M', data_matrix: 'forceSquare', code_128: '' } as const;

type Library = typeof import('zxing-wasm/full');

let loading: Promise<Library> | undefined;

/** The library, where it is needed, with its WebAssembly out of its own package: it would fetch it over the network otherwise. */
function load(): Promise<Library> {
  loading ??= (async () => {
    const library = await import('zxing-wasm/full');
    const file = readFileSync(createRequire(import.meta.url).resolve('zxing-wasm/full/zxing_full.wasm'));
    const wasmBinary = Uint8Array.from(file).buffer;
    await library.prepareZXingModule({ overrides: { wasmBinary }, fireImmediately: true });
    return library;
  })();
  return loading;
}

/** The modules of a symbol that says `text`. */
export async function encodeSymbol(kind: SymbolKind, text: string): Promise<SymbolModules> {
  const { writeBarcode } = await load();
  const { symbol, error } = await writeBarcode(text, {
    format: FORMATS[kind],
    options: WRITING[kind],
    scale: 1,
    addQuietZones: false,
  });
  if (error !== '') throw new Error(`the symbol could not be encoded: ${error}`);
  const { width, data } = symbol;
  const height = kind === 'code_128' ? 1 : symbol.height;
  return { width, height, dark: Uint8Array.from(data.subarray(0, width * height), (v) => (v < 128 ? 1 : 0)) };
}

/** How a picture is made black and white: by thresholds that follow the neighbourhood, then by one for all of it. Readers in use try more
 * than one way, too (common practice). */
const BINARIZERS = ['LocalAverage', 'GlobalHistogram'] as const;

/** What a decoder makes of a picture: the text of the first symbol of the kind, or undefined where it reads none.
 * @param grey 0..255, row-major */
export async function readSymbol(
  kind: SymbolKind,
  grey: Uint8Array,
  width: number,
  height: number,
): Promise<string | undefined> {
  const { readBarcodes } = await load();
  const data = new Uint8ClampedArray(4 * width * height);
  for (let i = 0; i < grey.length; i++) {
    data.fill(grey[i], 4 * i, 4 * i + 3);
    data[4 * i + 3] = 255;
  }
  const picture = { data, width, height, colorSpace: 'srgb' } as const;
  for (const binarizer of BINARIZERS) {
    const found = await readBarcodes(picture as never, {
      formats: [FORMATS[kind]],
      binarizer,
      tryHarder: true,
      tryDenoise: true,
      tryInvert: false,
      maxNumberOfSymbols: 1,
      textMode: 'Plain',
    });
    const symbol = found.find(({ isValid }) => isValid);
    if (symbol !== undefined) return symbol.text;
  }
  return undefined;
}
