import { describe, expect, it } from 'vitest';
import { CAUTION } from '../../src/report/caution.js';
import { sweepCsv } from '../../src/report/sweep-csv.js';
import { type SweepFigures, sweepTable } from '../../src/report/sweep-table.js';

const ZONES = [
  { field: 0, azimuthDeg: 0, place: 'axis' },
  { field: 0.7, azimuthDeg: 0, place: null },
];
const STOPS = { key: 'mount.f_number', values: [2.8, 4, 5.6] };
const SHIFTS = { key: 'mount.sensor_shift_um', values: [-20, 0] };

function sample(values: number[], figure: number | null, more = {}) {
  return {
    values,
    figure,
    met: (figure ?? -1) >= 0,
    rule: 'edge_blur',
    zone: 1,
    zones: [0.5, figure ?? 0],
    ...more,
  };
}

function report(changes: Partial<SweepFigures> = {}): SweepFigures {
  const best = sample([4.4, -8], 0.25, { whiteE: 3240 });
  return {
    rig: '12 mm f/2.8',
    model: 'third-order',
    figure: { kind: 'margin', task: 'read the crate tags' },
    lightFrom: { fNumber: 2.8, whiteE: 8000 },
    zones: ZONES,
    axes: [STOPS, SHIFTS],
    samples: [
      sample([2.8, -20], -0.5),
      sample([2.8, 0], -0.4),
      sample([4, -20], 0.1),
      sample([4, 0], 0.2),
      sample([5.6, -20], 0.05),
      sample([5.6, 0], null),
    ],
    best,
    bestSampled: sample([4, 0], 0.2),
    met: true,
    ...changes,
  };
}

const lines = (changes: Partial<SweepFigures> = {}) => sweepTable(report(changes)).split('\n');

describe('sweepTable', () => {
  it('shows two axes as a grid', () => {
    const text = lines();
    const at = text.indexOf('Least margin over all rules and zones');
    expect(text.slice(at + 1, at + 6)).toEqual([
      'f-number  sensor shift um',
      '                      -20      0',
      '     2.8            -50 %  -40 %',
      '       4            +10 %  +20 %',
      '     5.6           +5.0 %      -',
    ]);
  });

  it('shows one axis as a list, with where it is least and every zone', () => {
    const text = lines({
      axes: [STOPS],
      samples: [sample([2.8], -0.5), sample([4], 0.2, { decode: { value: 0.97 } }), sample([5.6], 0.1)],
    });
    expect(text.some((line) => /2\.8 +-50 % edge blur, 0\.7 +\+50 % -50 %/.test(line))).toBe(true);
    expect(text.some((line) => /4 +\+20 % .* 0\.970$/.test(line))).toBe(true);
  });

  it('tells the best place, the best sample, the light, and a best place on the border', () => {
    const words = lines().join(' ');
    expect(words).toContain('Best place: MET');
    expect(words).toContain(
      'Best between the samples: f/4.4, sensor shift -8 um: least margin +25 % (edge blur, 0.7).',
    );
    expect(words).toContain('Best sample: f/4, sensor shift 0 um: least margin +20 %');
    expect(words).toContain('Light: 3240 electrons are left of a white at this stop, of 8000 at f/2.8');
    expect(words).not.toContain('border');
    const onBorder = lines({ best: sample([5.6, -8], 0.2), met: false }).join(' ');
    expect(onBorder).toContain('on the border of what was swept (f-number)');
    expect(onBorder).toContain('Best place: NOT MET');
  });

  it('tells MTF and RMS in their own words', () => {
    const mtf = lines({ figure: { kind: 'mtf', lpPerMm: 40 }, met: null, lightFrom: null }).join(' ');
    expect(mtf).toContain('MTF at 40 lp/mm, with 12 mm f/2.8');
    expect(mtf).toContain('lowest MTF 0.250');
    expect(lines({ figure: { kind: 'wavefront_rms' }, met: null }).join(' ')).toContain('largest RMS 0.250');
  });

  it('tells the budget, in waves, and where it has no end', () => {
    const budget = [
      { coefficient: 'W131' as const, present: 1, lowest: -2.5, highest: 3.25 },
      { coefficient: 'W111' as const, present: 0, lowest: null, highest: null },
    ];
    const text = lines({ budget });
    expect(text).toContain('Budget at f/4.4, sensor shift -8 um: each coefficient alone, in waves');
    expect(text.find((line) => line.startsWith('coma'))?.split(/\s{2,}/)).toEqual([
      'coma (W131)',
      '-2.50',
      '1.00',
      '3.25',
    ]);
    expect(text.find((line) => line.startsWith('change of scale'))).toMatch(/no end +0\.00 no end$/);
    const gone = [{ coefficient: 'W131' as const, present: 1, lowest: 1, highest: 1 }];
    expect(lines({ budget: gone, best: null, bestSampled: null, axes: [], samples: [] }).join(' ')).toContain(
      'nothing left to give',
    );
  });

  it('tells the depth: with and without distances, without an end, or none', () => {
    const depth = {
      magnification: 0.0288,
      nearerMm: 81.3,
      fartherMm: 92.2,
      depthMm: 173.5,
      focusUm: [-60, 60] as [number, number],
    };
    const words = (one: SweepFigures['depth']) => lines({ depth: one }).join(' ');
    expect(words(depth)).toContain(
      '81.3 mm nearer to 92.2 mm farther than in focus: a depth of 173.5 mm at a magnification of 0.0288.',
    );
    const placed = { ...depth, objectDistanceMm: 429.4, nearestMm: 348.1, farthestMm: 521.6 };
    expect(words(placed)).toContain('from 348.1 mm to 521.6 mm, in focus at 429.4 mm');
    expect(words({ ...placed, farthestMm: null, fartherMm: null, depthMm: null })).toContain('to no end');
    expect(words(null)).toContain('it has no depth');
  });

  it('keeps within 80 columns and shows the caution', () => {
    const many = Array.from({ length: 15 }, (_, i) => i * 10 - 70);
    const wide = { key: 'mount.sensor_shift_um', values: many };
    const samples = STOPS.values.flatMap((stop) => many.map((shift) => sample([stop, shift], -1.234)));
    const text = lines({ axes: [STOPS, wide], samples });
    for (const line of text) expect(line.length).toBeLessThanOrEqual(80);
    expect(text.join(' ')).toContain(CAUTION);
    expect(text.filter((line) => line.trimStart().startsWith('2.8 '))).toHaveLength(2); // the grid goes on below
  });
});

describe('sweepCsv', () => {
  it('has a line a sample, a column an axis, zones by name', () => {
    const [head, first, , , , , last] = sweepCsv(report()).split('\n');
    expect(head).toBe(
      'mount.f_number,mount.sensor_shift_um,margin,met,rule,zone,margin at axis,margin at 0.7,decode_rate,white_e',
    );
    expect(first).toBe('2.8,-20,-0.5,false,edge_blur,0.7,0.5,-0.5,,');
    expect(last).toBe('5.6,0,,false,edge_blur,0.7,0.5,0,,');
  });
});
