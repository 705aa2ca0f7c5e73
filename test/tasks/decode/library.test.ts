import bwipjs from 'bwip-js';
import { describe, expect, it } from 'vitest';
import {
  encodeSymbol,
  readSymbol,
  type SymbolKind,
  type SymbolModules,
} from '../../../src/tasks/decode/library.js';

/** A symbol as a picture: so many pixels a module, a quiet zone of 10 modules. */
function picture({ width, height, dark }: SymbolModules, px: number, rise = px) {
  const [w, h] = [(width + 20) * px, height * rise + 20 * px];
  const grey = new Uint8Array(w * h).fill(220);
  for (let y = 0; y < height * rise; y++)
    for (let x = 0; x < width * px; x++)
      if (dark[Math.floor(y / rise) * width + Math.floor(x / px)] === 1)
        grey[(y + 10 * px) * w + x + 10 * px] = 20;
  return { grey, w, h };
}

/** The modules that another package draws. */
function drawnElsewhere(kind: SymbolKind, text: string): SymbolModules {
  const bcid = { qr: 'qrcode', data_matrix: 'datamatrix', code_128: 'code128' }[kind];
  const [raw] = bwipjs.raw({ bcid, text, eclevel: 'M' } as never) as unknown as {
    pixs: number[];
    pixx: number;
    pixy: number;
    sbs?: number[];
  }[];
  if (kind !== 'code_128') return { width: raw.pixx, height: raw.pixy, dark: Uint8Array.from(raw.pixs) };
  const bars = raw.sbs!.flatMap((wide, i) => new Array<number>(wide).fill(i % 2 === 0 ? 1 : 0));
  return { width: bars.length, height: 1, dark: Uint8Array.from(bars) };
}

const KINDS = ['qr', 'data_matrix', 'code_128'] as const;

describe('the library of symbols', () => {
  it.each(KINDS)('reads what it writes: %s', async (kind) => {
    const symbol = await encodeSymbol(kind, '047110815007');
    const { grey, w, h } = picture(symbol, 4, kind === 'code_128' ? 80 : 4);
    expect(await readSymbol(kind, grey, w, h)).toBe('047110815007');
    expect(await readSymbol(kind, new Uint8Array(w * h).fill(200), w, h)).toBeUndefined();
  });

  it.each(KINDS)('reads what bwip-js writes: %s', async (kind) => {
    const { grey, w, h } = picture(drawnElsewhere(kind, '047110815007'), 4, kind === 'code_128' ? 80 : 4);
    expect(await readSymbol(kind, grey, w, h)).toBe('047110815007');
  });

  it('writes the modules that bwip-js writes, where the standard leaves no choice', async () => {
    for (const kind of ['data_matrix', 'code_128'] as const)
      expect(await encodeSymbol(kind, '047110815007')).toEqual(drawnElsewhere(kind, '047110815007'));
    // the mask of a QR code is free to choose; its size is not
    expect(await encodeSymbol('qr', '047110815007')).toMatchObject({ width: 21, height: 21 });
  });

  it('takes no symbol of another kind', async () => {
    const { grey, w, h } = picture(await encodeSymbol('data_matrix', 'A1'), 4);
    expect(await readSymbol('qr', grey, w, h)).toBeUndefined();
  });
});
