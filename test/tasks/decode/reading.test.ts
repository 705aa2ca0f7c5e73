import { afterEach, describe, expect, it, vi } from 'vitest';
import { InputError, InterruptedError } from '../../../src/errors.js';
import { parseTask } from '../../../src/files/load-task.js';
import { DecodeCrew } from '../../../src/tasks/decode/crew.js';
import * as library from '../../../src/tasks/decode/library.js';
import { BlurDesk } from '../../../src/tasks/decode/patch-blur.js';
import { wilson } from '../../../src/tasks/decode/rate.js';
import {
  type Outcome,
  patchOversample,
  Reading,
  type ReadingSetup,
} from '../../../src/tasks/decode/reading.js';
import { moduleMap, patchPixels, SHAPES, sheetOf } from '../../../src/tasks/decode/sheet.js';
import { layOut } from '../../../src/tasks/evaluate.js';
import { COLOUR, placeAt, type RigParts, SENSOR, taskRig } from '../rigs.js';

vi.mock(import('../../../src/tasks/decode/library.js'), async (original) => {
  const real = await original();
  return { ...real, readSymbol: vi.fn(real.readSymbol) };
});
afterEach(() => vi.mocked(library.readSymbol).mockReset());

/** Symbols are drawn, blurred and read; the machine may be busy with other tests. */
vi.setConfig({ testTimeout: 60_000 });

const desk = new BlurDesk();
const camera = { sensor: SENSOR };

function setup(parts: RigParts, h: number, more: Partial<ReadingSetup> = {}): ReadingSetup {
  const rig = taskRig({ camera, ...parts });
  return { rig, place: placeAt(rig, h), symbol: 'qr', modulePx: 3, seed: 1, ...more };
}
const outcomes = (...[parts, h, more]: Parameters<typeof setup>): Promise<Outcome[]> =>
  new Reading(setup(parts, h, more), desk).tryAll(0, 12);
const share = (all: readonly Outcome[]) => all.filter((outcome) => outcome === 'read').length / all.length;

describe('sheets', () => {
  it('depend on seed and number alone, and differ', () => {
    const sheets = Array.from({ length: 20 }, (_, trial) => sheetOf('qr', 1, trial));
    expect(new Set(sheets.map(({ text }) => text)).size).toBe(20);
    expect(sheetOf('qr', 1, 7)).toEqual(sheets[7]);
    expect(sheetOf('qr', 2, 7)).not.toEqual(sheets[7]);
    for (const { text, x, y, turnDeg } of sheets) {
      expect(text).toMatch(/^[0-9A-Z]{12}$/);
      expect(Math.max(Math.abs(x), Math.abs(y))).toBeLessThan(1);
      expect(Math.abs(turnDeg)).toBeLessThan(180);
    }
  });

  it.each(['qr', 'data_matrix', 'code_128'] as const)(
    'fit their patch with the quiet zone: %s',
    async (kind) => {
      const rig = taskRig();
      const [width, height] = patchPixels(kind, 3);
      const { quiet } = SHAPES[kind];
      for (let trial = 0; trial < 12; trial++) {
        const sheet = sheetOf(kind, 5, trial);
        const modules = await library.encodeSymbol(kind, sheet.text);
        const map = moduleMap(rig, placeAt(rig, 0), modules, kind, sheet, 3, 2);
        const rows = modules.height === 1 ? 1 : modules.height;
        const quietRows = modules.height === 1 ? quiet / SHAPES[kind].height : quiet; // in rows of the one row
        for (const u of [-quiet, modules.width + quiet])
          for (const v of [-quietRows, rows + quietRows]) {
            const [x, y] = [map.xu * u + map.xv * v + map.x0, map.yu * u + map.yv * v + map.y0];
            expect(Math.min(x, y, 2 * width - x, 2 * height - y)).toBeGreaterThan(-1e-9);
          }
      }
    },
  );

  it('are drawn together by the distortion of their place', () => {
    const rig = taskRig({ waves: { distortion_percent: -5 } });
    const sheet = { ...sheetOf('qr', 1, 0), turnDeg: 0 };
    const modules = { width: 21, height: 21, dark: new Uint8Array(441) };
    const map = moduleMap(rig, placeAt(rig, 1), modules, 'qr', sheet, 3, 2);
    // r' = r (1 - 0.05 h^2): along the radius 1 - 0.15, across it 1 - 0.05
    expect([map.xu / 6, map.yv / 6, map.xv, map.yu]).toEqual(
      [0.85, 0.95, 0, 0].map((value) => expect.closeTo(value, 9)),
    );
  });
});

describe('reading', () => {
  // Defocus makes a disc of radius 4 N lambda W020 = 8.8 um a wave. Symbols are lost where it grows as large as a module (15 um, 10 um).
  it.each([
    ['qr', 3, [0, 1, 1.5, 1.7, 2.5]],
    ['data_matrix', 3, [0, 1, 1.5, 1.7, 2.5]],
    ['code_128', 2, [0, 0.7, 1, 1.2, 1.8]],
  ] as const)('falls from all to nothing as blur grows: %s', async (symbol, modulePx, blurs) => {
    const rates: { read: number; interval: [number, number] }[] = [];
    for (const W020 of blurs) {
      const all = await new Reading(setup({ waves: { W020 } }, 0, { symbol, modulePx }), desk).tryAll(0, 12);
      const read = all.filter((outcome) => outcome === 'read').length;
      rates.push({ read, interval: wilson(read, all.length) });
      expect(all).not.toContain('misread');
    }
    expect(rates[0].read).toBeGreaterThanOrEqual(11);
    expect(rates[1].read).toBeGreaterThanOrEqual(10);
    expect(rates[4].read).toBe(0);
    for (const [i, { interval }] of rates.entries())
      for (const later of rates.slice(i + 1)) expect(later.interval[0]).toBeLessThanOrEqual(interval[1]);
  });

  it('follows the size of a module against the blur, not the blur alone', async () => {
    const blurred = { waves: { W020: 1.6 } };
    expect(share(await outcomes(blurred, 0, { modulePx: 2 }))).toBeLessThan(0.1);
    expect(share(await outcomes(blurred, 0, { modulePx: 6 }))).toBeGreaterThan(0.9);
  });

  it('suffers from little light', async () => {
    const dim = { camera: { sensor: { ...SENSOR, white_e: 8 } } };
    expect(share(await outcomes(dim, 0))).toBeLessThan(0.5);
  });

  it('reads colour pictures, mosaics too, in grey: green counts more than blue', async () => {
    const colour = { ...COLOUR, sensor: SENSOR };
    expect(share(await outcomes({ camera: colour }, 1))).toBeGreaterThan(0.9);
    expect(share(await outcomes({ camera: { ...colour, mosaic: 'grbg' } }, 1))).toBeGreaterThan(0.9);
    const outOfFocus = (nm: number) => ({ colour: { axial_um: { 460: 0, 540: 0, 620: 0, [nm]: 250 } } });
    expect(share(await outcomes({ camera: colour, lens: outOfFocus(460) }, 1))).toBeGreaterThan(0.9);
    expect(share(await outcomes({ camera: colour, lens: outOfFocus(540) }, 1))).toBeLessThan(0.2);
  });

  it('counts another text as a misread, never as read', async () => {
    vi.mocked(library.readSymbol).mockResolvedValueOnce('SOMETHINGELS').mockResolvedValueOnce(undefined);
    const found = await new Reading(setup({}, 0), desk).tryAll(0, 4);
    expect(found).toEqual(['misread', 'unread', 'read', 'read']);
  });

  it('does not depend on how the tries are cut up', async () => {
    const reading = () => new Reading(setup({ waves: { W020: 1.5 } }, 0), desk);
    const whole = await reading().tryAll(0, 9);
    const pieces = [await reading().tryAll(0, 1), await reading().tryAll(1, 3), await reading().tryAll(4, 5)];
    expect(pieces.flat()).toEqual(whole);
    expect(new Set(whole).size).toBe(2); // some of each
  });

  it('refuses modules so large that a symbol cannot be simulated', () => {
    expect([5, 20, 40].map((px) => patchOversample('qr', px))).toEqual([3, 2, 1]);
    expect(() => patchOversample('qr', 60)).toThrow(InputError);
    const { rules } = parseTask({
      require: [{ decode: { symbol: 'qr', module_px: 60, success_at_least: 0.9 } }],
    });
    expect(() => layOut(taskRig(), rules, [0])).toThrow(/60 px.*Allowed: patches of up to 1920 px/);
  });
});

describe('a crew', () => {
  const rule = { trials: 16, successAtLeast: 0.7 };

  it('gives the same rate for any number of threads', async () => {
    const blurred = setup({ waves: { W020: 1.55 } }, 0);
    const rates = [];
    for (const threads of [1, 3]) {
      const crew = new DecodeCrew(threads);
      try {
        rates.push(await crew.rate(blurred, rule), await crew.rate({ ...blurred, seed: 2 }, rule));
      } finally {
        await crew.close();
      }
    }
    expect(rates[2]).toEqual(rates[0]);
    expect(rates[3]).toEqual(rates[1]);
  });

  it('stops when it is told to', async () => {
    const crew = new DecodeCrew(1);
    const controller = new AbortController();
    controller.abort();
    await expect(crew.rate(setup({}, 0), rule, controller.signal)).rejects.toThrow(InterruptedError);
    await crew.close();
  });

  it('tells of a thread that fails', async () => {
    const crew = new DecodeCrew(2);
    const broken = { ...setup({}, 0), symbol: 'none' as never };
    await expect(crew.rate(broken, rule)).rejects.toThrow();
    await crew.close();
  });
});
