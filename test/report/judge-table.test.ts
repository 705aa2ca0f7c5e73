import { describe, expect, it } from 'vitest';
import { CAUTION } from '../../src/report/caution.js';
import { judgeTable, verdictWords } from '../../src/report/judge-table.js';
import { partName, percentText } from '../../src/report/task-words.js';
import { COLOURED } from '../../src/report/text.js';
import type { Advice } from '../../src/tasks/advice.js';
import type { JudgeReport } from '../../src/tasks/judge.js';
import type { RuleVerdict, ZoneVerdict } from '../../src/tasks/verdict.js';

function zone(place: string | null, margin: number, more: Partial<ZoneVerdict> = {}): ZoneVerdict {
  return {
    field: place === 'axis' ? 0 : 0.75,
    azimuthDeg: place === null ? 45 : 0,
    place,
    imageHeightMm: place === 'axis' ? 0 : 3.456,
    value: 0.3 * (1 + margin),
    limit: 0.3,
    margin,
    met: margin >= 0,
    band: 'mono',
    ...more,
  };
}

const both = { tangential: 0.44, sagittal: 0.55, directionDeg: 12.4 };
const CONTRAST: RuleVerdict = {
  rule: 'contrast',
  unit: null,
  asked: { lpPerMm: 28.986 },
  met: false,
  margin: -0.25,
  zones: [zone('axis', 1.2, both), zone(null, -0.25, both)],
};
const PLACEMENT: RuleVerdict = {
  rule: 'placement',
  unit: 'mm',
  asked: { modelOrder: 3 },
  met: true,
  margin: 0.031,
  zones: [zone('axis', 1), zone(null, 0.031, { band: 'blue' })],
};
const rate = { trials: 49, read: 49, misread: 0, interval: [0.927, 1] as [number, number], band: undefined };
const DECODE: RuleVerdict = {
  rule: 'decode',
  unit: null,
  asked: { symbol: 'qr', modulePx: 5 },
  met: true,
  margin: 0.02,
  zones: [
    zone('axis', 0.02, { ...rate, value: 1, limit: 0.98 }),
    zone(null, 0.02, { ...rate, value: 1, limit: 0.98 }),
  ],
};

function report(changes: Partial<JudgeReport> = {}): JudgeReport {
  return {
    task: 'read the crate tags',
    rig: '12 mm f/2.8',
    fNumber: 2.8,
    sensorShiftUm: 0,
    model: 'third-order',
    seed: 1,
    met: false,
    margin: -0.25,
    largestField: 0.553,
    cornerField: 0.999,
    rules: [CONTRAST, PLACEMENT, DECODE],
    limits: [
      { coefficient: 'W222', gain: 0.5, margin: 0.25 },
      { coefficient: 'lateral_colour', gain: 0, margin: -0.25 },
    ],
    advice: [],
    warnings: [],
    ...changes,
  };
}

describe('judgeTable', () => {
  it('shows each rule with its limit, and each zone with value, margin and verdict, within 80 columns', () => {
    const lines = judgeTable(report()).split('\n');
    for (const line of lines) expect(line.length).toBeLessThanOrEqual(80);
    expect(lines[0]).toBe('read the crate tags, with 12 mm f/2.8: f/2.8, third-order model');
    const below = (title: string) => lines.slice(lines.findIndex((line) => line.startsWith(title)));
    const contrast = below('contrast:');
    expect(contrast[0]).toBe('contrast: MTF of lens and camera at 28.99 lp/mm, at least 0.3');
    expect(contrast[2].split(/\s+/)).toEqual(
      'axis 0.00 0.660 0.300 +120 % met 0.440 0.550 12 deg'.split(' '),
    );
    expect(contrast[3].split(/\s+/)).toEqual(
      '0.75@45 3.46 0.225 0.300 -25 % NOT MET 0.440 0.550 12 deg'.split(' '),
    );
    const placement = below('placement:');
    expect(placement[0]).toBe('placement: displacement left by a radial model of order 3, at most 0.3 mm');
    expect(placement[3].split(/\s+/)).toEqual('0.75@45 3.46 0.31 0.30 +3.1 % met blue'.split(' '));
    const decode = below('decode:');
    expect(decode[0]).toBe('decode: share of qr symbols read, 5 px a module, at least 0.98');
    expect(decode[2].split(/\s+/)).toEqual(
      'axis 0.00 1.000 0.980 +2.0 % met 49 of 49 0 0.927-1.000'.split(' '),
    );
  });

  it('shows what limits it, by its name', () => {
    const lines = judgeTable(report()).split('\n');
    const at = lines.findIndex((line) => line.startsWith('What limits it'));
    expect(lines[at + 2]).toMatch(/^astigmatism \(W222\) +\+25 % \+50 %$/);
    expect(lines[at + 3]).toMatch(/^lateral colour +-25 % 0\.0 %$/);
    expect(judgeTable(report({ limits: [] }))).not.toContain('What limits it');
  });

  it('ends with the caution, and claims fitness for nothing', () => {
    for (const met of [true, false]) {
      const text = judgeTable(report({ met }));
      expect(text.replaceAll('\n', ' ')).toContain(CAUTION);
      expect(text).not.toMatch(/\bsafe\b|suitable|certified|approved|guarantee/i);
    }
    expect(judgeTable(report(), COLOURED)).toContain('\x1b[1mNOT MET');
  });
});

describe('verdictWords', () => {
  const words = (changes: Partial<JudgeReport>) => verdictWords(report(changes)).join(' ');

  it('name the worst rule and zone, and the largest field', () => {
    expect(words({})).toContain('Furthest from its limit is contrast at 0.75@45: -25 %.');
    expect(words({})).toContain('It is met from the axis out to h = 0.553; the corner lies at 0.999.');
    expect(words({ largestField: 0 })).toContain('not even met on the axis');
    expect(words({ largestField: 0.999 })).toContain('met all over the sensor');
    expect(words({ met: true, rules: [PLACEMENT] })).toBe(
      'The least margin is +3.1 %: placement at 0.75@45. It is met from the axis out to h = 0.553; the corner lies at 0.999.',
    );
  });

  it('say where tries are too few to be sure', () => {
    expect(words({})).toContain('raise trials to be surer');
    expect(words({ rules: [CONTRAST] })).not.toContain('trials');
  });

  it.each<[Advice, string]>([
    [
      { change: 'focus', sensorShiftUm: -31.2, margin: 0.1, met: true },
      'What to change first: set the sensor shift to -31.2 um; this alone meets the task, with a least margin of +10 %.',
    ],
    [
      { change: 'stop', fNumber: 5.6, whiteE: 2000, margin: -0.1, met: false },
      'set the stop to f/5.6, where 2000 electrons are left of a white; this alone brings the least margin to -10 %.',
    ],
    [{ change: 'stop', fNumber: 5.6, margin: 0.2, met: true }, 'set the stop to f/5.6; this alone meets'],
    [
      { change: 'lens', coefficient: 'W131', margin: 0.2, met: true },
      'take a lens with less coma (W131): with none of it, this alone meets',
    ],
    [
      { change: 'task', rule: 'detect', margin: -0.5, met: false },
      'even a lens without any error fails detect at this stop: the feature has too little light',
    ],
    [
      { change: 'task', rule: 'edge_blur', margin: -0.5, met: false },
      'fails edge blur at this stop: the pixels or the stop are too coarse',
    ],
  ])('put the change in words: %j', (advice, sentence) => {
    expect(words({ advice: [advice] })).toContain(sentence);
  });

  it('send to sweep where no single change helps', () => {
    expect(words({})).toContain('try them together with foreglass sweep');
  });
});

describe('words', () => {
  it('write margins as they are read', () => {
    expect([0.3, -0.014, 0, -1e-5, 2.02, Number.NEGATIVE_INFINITY].map(percentText)).toEqual([
      '+30 %',
      '-1.4 %',
      '0.0 %',
      '0.0 %',
      '+202 %',
      '-',
    ]);
    expect([partName('W220'), partName('sensor_tilt')]).toEqual(['field curvature (W220)', 'sensor tilt']);
  });
});
