import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import { type ExponentSign, FftPlan } from '../../src/numeric/fft.js';
import { instantiateKernels } from '../../src/numeric/kernels.js';
import { type Columns, noise, relativeError, Workbench } from './workbench.js';

const SIZES = [64, 128, 256, 512, 1024, 2048];
/** Rounding grows about as eps log2 n; measured 1.4e-8 log2 n on noise, so twice that leaves room. */
const limit = (n: number) => 3e-8 * Math.log2(n);

let bench: Workbench;
beforeAll(() => {
  bench = new Workbench();
});

function noiseColumns(n: number, seed: number): Columns {
  return [0, 1, 2, 3].map((lane) => noise(2 * n, 4 * seed + lane));
}

/** The same in float64, after weights and with the rows from `used` on put to zero. */
function reference(columns: Columns, sign: ExponentSign, weights?: ArrayLike<number>): Columns {
  const n = columns[0].length / 2;
  const plan = new FftPlan(n);
  return columns.map((column) => {
    const weighted = column.map((value, i) => (weights ? value * (weights[i >> 1] ?? 0) : value));
    const out = new Float64Array(2 * n);
    plan.transform(out, weighted, sign);
    return out;
  });
}

function worstError(found: Columns, expected: Columns): number {
  return Math.max(...expected.map((column, lane) => relativeError(found[lane], column)));
}

function ones(count: number): Float64Array {
  return new Float64Array(count).fill(1);
}

describe('the forward transform', () => {
  it.each(SIZES)('of single samples is a turning root of unity, n = %i', (n) => {
    const rows = [0, 1, n / 2 + 3, n - 1];
    const columns = rows.map((row) => {
      const column = new Float64Array(2 * n);
      column[2 * row] = 1;
      return column;
    });
    const panel = bench.placePanel(columns);
    bench.kernels.forward(panel, bench.place(ones(n)), n, panel, n);
    const expected = rows.map((row) => {
      const spectrum = new Float64Array(2 * n);
      for (let k = 0; k < n; k++) {
        const angle = (-2 * Math.PI * ((row * k) % n)) / n;
        spectrum[2 * k] = Math.cos(angle);
        spectrum[2 * k + 1] = Math.sin(angle);
      }
      return spectrum;
    });
    expect(worstError(bench.readSpectra(panel, n), expected)).toBeLessThan(limit(n));
  });

  it.each(SIZES)('agrees with float64 on noise, n = %i', (n) => {
    const columns = noiseColumns(n, n);
    const panel = bench.placePanel(columns);
    bench.kernels.forward(panel, bench.place(ones(n)), n, panel, n);
    expect(worstError(bench.readSpectra(panel, n), reference(columns, 'minus'))).toBeLessThan(limit(n));
  });

  it('weighs rows and never reads those past the last one used', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...SIZES),
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.integer({ min: 0, max: 1000 }),
        (n, share, seed) => {
          const used = Math.max(1, Math.round(share * n));
          const local = new Workbench();
          const columns = noiseColumns(n, seed);
          const weights = noise(used, seed + 7);
          const source = local.placePanel(columns, used); // NaN from row `used` on
          const target = local.placePanel(columns, 0);
          local.kernels.forward(source, local.place(weights), used, target, n);
          const expected = reference(columns, 'minus', weights);
          expect(worstError(local.readSpectra(target, n), expected)).toBeLessThan(limit(n));
          expect(
            worstError(
              local.readPanel(source, used),
              columns.map((c) => c.subarray(0, 2 * used)),
            ),
          ).toBe(0);
        },
      ),
      { numRuns: 60 },
    );
  });

  it('of nothing is zero', () => {
    const panel = bench.placePanel(noiseColumns(128, 1), 0);
    bench.kernels.forward(panel, bench.place([1]), 0, panel, 128);
    expect(bench.floats(panel, 8 * 128).every((value) => value === 0)).toBe(true);
  });

  it('keeps the four columns apart', () => {
    const n = 256;
    const columns = noiseColumns(n, 3);
    const alone = columns.map((column, lane) => (lane === 2 ? column : new Float64Array(2 * n)));
    const [together, single] = [columns, alone].map((set) => {
      const panel = bench.placePanel(set);
      bench.kernels.forward(panel, bench.place(ones(n)), n, panel, n);
      return bench.readSpectra(panel, n);
    });
    expect(together[2]).toEqual(single[2]);
    expect(single[1].every((value) => value === 0)).toBe(true);
  });

  it('leaves every frequency in one row', () => {
    for (const n of SIZES) {
      const rows = new Set(Array.from({ length: n }, (_, k) => bench.kernels.positionOf(k, n)));
      expect(rows.size).toBe(n);
      expect(Math.min(...rows)).toBe(0);
      expect(Math.max(...rows)).toBe(n - 1);
    }
  });
});

describe('the inverse transform', () => {
  it.each(SIZES)('agrees with float64 on noise, n = %i', (n) => {
    const spectra = noiseColumns(n, n + 1);
    const scattered = spectra.map((spectrum) => {
      const rows = new Float64Array(2 * n);
      for (let k = 0; k < n; k++) {
        const at = 2 * bench.kernels.positionOf(k, n);
        rows[at] = spectrum[2 * k];
        rows[at + 1] = spectrum[2 * k + 1];
      }
      return rows;
    });
    const source = bench.placePanel(scattered);
    const target = bench.placePanel(scattered, 0);
    bench.kernels.inverse(source, target, n);
    expect(worstError(bench.readPanel(target, n), reference(spectra, 'plus'))).toBeLessThan(limit(n));
  });

  it.each(SIZES)('undoes the forward one but for the factor n = %i', (n) => {
    const columns = noiseColumns(n, n + 2);
    const panel = bench.placePanel(columns);
    bench.kernels.forward(panel, bench.place(ones(n).fill(1 / n)), n, panel, n); // 1/n is exact
    bench.kernels.inverse(panel, panel, n);
    expect(worstError(bench.readPanel(panel, n), columns)).toBeLessThan(2 * limit(n));
  });
});

describe('spectra in lines', () => {
  it.each(SIZES)('hold the same numbers, transposed four by four, n = %i', (n) => {
    const columns = noiseColumns(n, n + 3);
    const used = Math.round(0.7 * n);
    const weights = bench.place(noise(used, 5));
    const source = bench.placePanel(columns, used);
    const plain = bench.placePanel(columns, 0);
    const lineBytes = 3 * 128 + 64; // room for three panels and a gap
    const lines = bench.allocate((n / 4) * lineBytes);
    bench.floats(lines, (n / 16) * lineBytes).fill(-1);
    bench.kernels.forward(source, weights, used, plain, n);
    const work = bench.placePanel(columns, 0);
    bench.kernels.forwardToLines(source, weights, weights, used, work, n, lines + 128, lineBytes); // the middle panel
    const spectra = bench.floats(plain, 8 * n);
    const written = bench.floats(lines, (n / 16) * lineBytes);
    let wrong = 0;
    for (let line = 0; line < n / 4; line++) {
      for (let i = 0; i < lineBytes / 4; i++) {
        const [column, part, position] = [(i >> 3) - 4, (i >> 2) & 1, i & 3];
        const inside = column >= 0 && column < 4;
        const expected = inside ? spectra[8 * (4 * line + position) + 4 * part + column] : -1;
        if (written[(line * lineBytes) / 4 + i] !== expected) wrong++;
      }
    }
    expect(wrong).toBe(0);

    bench.kernels.inverse(plain, plain, n);
    bench.kernels.inverseFromLines(lines + 128, lineBytes, work, n);
    expect(bench.floats(work, 8 * n)).toEqual(bench.floats(plain, 8 * n));
  });
});

describe('the kernels', () => {
  it('leave the memory alone when another thread loads them', () => {
    const memory = new WebAssembly.Memory({ initial: 2, maximum: 65536, shared: true });
    const bytes = new Uint8Array(memory.buffer).fill(0xa5);
    instantiateKernels(memory);
    expect(bytes.every((byte) => byte === 0xa5)).toBe(true);
  });

  it('work above 2 GiB', () => {
    const high = new Workbench(2 ** 31 + 4096);
    const columns = noiseColumns(64, 9);
    const panel = high.placePanel(columns);
    high.kernels.forward(panel, high.place(ones(64)), 64, panel, 64);
    expect(worstError(high.readSpectra(panel, 64), reference(columns, 'minus'))).toBeLessThan(limit(64));
  });
});
