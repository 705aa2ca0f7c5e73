import { describe, expect, it } from 'vitest';
import { distanceIn } from '../../src/charts/coverage.js';
import type { ChartPlane } from '../../src/charts/draw.js';
import { drawChart } from '../../src/charts/draw-chart.js';
import type { ChartChoices } from '../../src/charts/options.js';
import { rectangle } from '../../src/charts/shape.js';
import type { ChartKind, ChartTruth } from '../../src/charts/truth.js';
import { InputError } from '../../src/errors.js';
import { chartRig } from './rigs.js';

const RIG = chartRig([320, 240]);

/** Where a sample's middle lies, in sensor pixels. */
function toPx({ oversample }: ChartPlane, sample: number): number {
  return (sample + 0.5) / oversample - 0.5;
}

/** Looks at the samples within a square around a place: their index and where they lie. */
function around(
  plane: ChartPlane,
  [x, y]: readonly [number, number],
  reachPx: number,
  look: (i: number, px: number, py: number) => void,
): void {
  const { width, height, oversample } = plane;
  const range = (px: number, size: number) => [
    Math.max(0, Math.floor((px - reachPx + 0.5) * oversample)),
    Math.min(size - 1, Math.ceil((px + reachPx + 0.5) * oversample)),
  ];
  const [left, right] = range(x, width);
  const [top, bottom] = range(y, height);
  for (let row = top; row <= bottom; row++)
    for (let column = left; column <= right; column++)
      look(row * width + column, toPx(plane, column), toPx(plane, row));
}

/** How much of each sample is dark, from its level: 0 where it is white to the last bit of float32. */
function darkness({ samples }: ChartPlane, { levels: { white, dark } }: ChartTruth): Float64Array {
  return Float64Array.from(samples, (value) => (Math.fround(white) - value) / (white - dark));
}

function darkArea(plane: ChartPlane, truth: ChartTruth): number {
  return darkness(plane, truth).reduce((sum, value) => sum + value, 0) / plane.oversample ** 2;
}

/** The chart with oversample x oversample samples put together to a pixel. */
function binned({ width, height, oversample, samples }: ChartPlane): Float64Array {
  const across = width / oversample;
  const pixels = new Float64Array(across * (height / oversample));
  for (let row = 0; row < height; row++)
    for (let column = 0; column < width; column++)
      pixels[Math.floor(row / oversample) * across + Math.floor(column / oversample)] +=
        samples[row * width + column] / oversample ** 2;
  return pixels;
}

function largestDifference(a: Float64Array, b: Float64Array): number {
  return a.reduce((most, value, i) => Math.max(most, Math.abs(value - b[i])), 0);
}

const ALL: [ChartKind, ChartChoices][] = [
  ['edges', {}],
  ['dots', {}],
  ['star', {}],
  ['bars', { sizePx: 20, cyclesPerPixel: [0.1, 0.2, 0.4] }],
  ['checker', { sizePx: 20.5, angleDeg: 7 }],
];

describe('drawChart', () => {
  it.each(ALL)(
    'draws %s in the size of the sensor times the oversampling, between its two levels',
    (kind, choices) => {
      const { plane, truth } = drawChart(kind, RIG, choices);
      expect([plane.width, plane.height, plane.samples.length]).toEqual([1280, 960, 1280 * 960]);
      const contrast = kind === 'edges' ? 4 : 20;
      expect(truth).toMatchObject({
        chart: kind,
        rig: 'chart lens',
        pixels: [320, 240],
        pixelPitchUm: 5,
        axisPx: [159.5, 119.5],
        fullFieldMm: 2,
        oversample: 4,
        levels: { white: 0.8, dark: 0.8 / contrast },
      });
      let [least, most] = [1, 0];
      for (const value of plane.samples) {
        least = Math.min(least, value);
        most = Math.max(most, value);
      }
      // shapes that share a side add up in float32, whose step at 0.8 is 6e-8
      expect(least).toBeCloseTo(0.8 / contrast, 6);
      expect(most).toBeCloseTo(0.8, 6);
    },
  );

  it.each(ALL)(
    'gives the same %s at any oversampling once samples are put together to pixels',
    (kind, choices) => {
      const one = binned(drawChart(kind, RIG, { ...choices, oversample: 1 }).plane);
      for (const oversample of [3, 4]) {
        const more = binned(drawChart(kind, RIG, { ...choices, oversample }).plane);
        // exact areas add up; what is left is the rounding of float32 planes, 6e-8 a value
        expect(largestDifference(one, more)).toBeLessThan(2e-7);
      }
    },
  );
});

describe('edges', () => {
  it('covers each sample exactly by the closed form', () => {
    const { plane, truth } = drawChart('edges', RIG, { sizePx: 60, grid: [1, 1], angleDeg: 6 });
    const dark = darkness(plane, truth);
    const side = 1 / plane.oversample;
    let [checked, worst] = [0, 0];
    for (const { from, to, normalDeg } of truth.edges!) {
      const [nx, ny] = [Math.cos((normalDeg * Math.PI) / 180), Math.sin((normalDeg * Math.PI) / 180)];
      const [x, y] = [(from[0] + to[0]) / 2, (from[1] + to[1]) / 2];
      around(plane, [x, y], 28, (i, px, py) => {
        const [dx, dy] = [px - x, py - y];
        if (Math.abs(dx * -ny + dy * nx) > 25 || Math.abs(dx * nx + dy * ny) > 3) return; // away from the corners
        // area of the square below the line at distance -d, as in the test of the coverage
        const d = -(dx * nx + dy * ny) / side;
        const [a, b] = [Math.abs(nx), Math.abs(ny)];
        const ramp = (value: number) => Math.max(0, value) ** 2;
        const area =
          (ramp(d + a / 2 + b / 2) -
            ramp(d + a / 2 - b / 2) -
            ramp(d - a / 2 + b / 2) +
            ramp(d - a / 2 - b / 2)) /
          (2 * a * b);
        worst = Math.max(worst, Math.abs(dark[i] - area));
        checked++;
      });
    }
    expect(worst).toBeLessThan(1e-6);
    expect(checked).toBeGreaterThan(4 * 50 * 6 * 15); // 50 px of each edge, 6 px wide, 16 samples a pixel
  });

  it('has sides along and across the radius, off by the slant, dark inside', () => {
    const { plane, truth } = drawChart('edges', chartRig([640, 480]), { sizePx: 60 });
    expect(truth.edges).toHaveLength(4 * 5 * 3);
    for (const edge of truth.edges!) {
      const { from, to, normalDeg, x, y, roomPx, angleDeg } = edge;
      expect(Math.hypot(to[0] - from[0], to[1] - from[1])).toBeCloseTo(60, 6);
      expect([(from[0] + to[0]) / 2, (from[1] + to[1]) / 2]).toEqual([
        expect.closeTo(x, 6),
        expect.closeTo(y, 6),
      ]);
      expect(roomPx).toBe(30);
      const [nx, ny] = [Math.cos((normalDeg * Math.PI) / 180), Math.sin((normalDeg * Math.PI) / 180)];
      expect(nx * (to[0] - from[0]) + ny * (to[1] - from[1])).toBeCloseTo(0, 6);
      const levelAt = (px: number, py: number) =>
        plane.samples[Math.round((py + 0.5) * 4 - 0.5) * plane.width + Math.round((px + 0.5) * 4 - 0.5)];
      expect(levelAt(x + 3 * nx, y + 3 * ny)).toBeCloseTo(0.8, 6);
      expect(levelAt(x - 3 * nx, y - 3 * ny)).toBeCloseTo(0.2, 6);
      // the angle against the pixels is the fold of the normal
      const folded = ((normalDeg % 90) + 90) % 90;
      expect(angleDeg).toBeCloseTo(Math.min(folded, 90 - folded), 6);
      expect(angleDeg).toBeGreaterThanOrEqual(3);
      expect(angleDeg).toBeLessThan(44);
      // the modulation is the one nearer to the normal
      const radius = Math.atan2(y - 239.5, x - 319.5);
      const along = Math.abs(Math.cos((normalDeg * Math.PI) / 180 - radius));
      expect(edge.direction).toBe(along > Math.SQRT1_2 ? 'tangential' : 'sagittal');
      expect(edge.field).toBeCloseTo((0.005 * Math.hypot(x - 319.5, y - 239.5)) / 2, 8);
      expect(edge.azimuthDeg).toBeCloseTo(((radius * 180) / Math.PI + 360) % 360, 6);
      const off = Math.acos(
        Math.min(1, edge.direction === 'tangential' ? along : Math.sqrt(1 - along * along)),
      );
      expect(Math.abs(edge.offRadiusDeg)).toBeCloseTo((off * 180) / Math.PI, 4);
    }
    // far from the axis the sides of a square keep to its own slant of 5 degrees, a little turned over its
    // width
    const far = truth.edges!.filter(({ field }) => field > 0.6);
    for (const { offRadiusDeg } of far) expect(Math.abs(Math.abs(offRadiusDeg) - 5)).toBeLessThan(9);
  });

  it('stands at field points on demand', () => {
    const { truth } = drawChart('edges', chartRig([640, 480]), {
      sizePx: 50,
      fields: ['axis', '0.5@30', 0.6],
    });
    const middles = [0, 1, 2].map((patch) => {
      const own = truth.edges!.filter((edge) => edge.patch === patch);
      return [own.reduce((sum, { x }) => sum + x / 4, 0), own.reduce((sum, { y }) => sum + y / 4, 0)];
    });
    const at = (h: number, degrees: number) => [
      expect.closeTo(319.5 + 400 * h * Math.cos((degrees * Math.PI) / 180), 6),
      expect.closeTo(239.5 + 400 * h * Math.sin((degrees * Math.PI) / 180), 6),
    ];
    expect(middles).toEqual([at(0, 0), at(0.5, 30), at(0.6, 0)]);
  });

  it('counts the field from an axis that is not in the middle', () => {
    const { truth } = drawChart('edges', chartRig([320, 240], { axis_px: [-1000, 119.5] }), { grid: [1, 1] });
    const [right] = truth.edges!;
    expect(right.field).toBeCloseTo((0.005 * Math.hypot(right.x + 1000, right.y - 119.5)) / 2, 8);
  });
});

describe('dots', () => {
  it('have the area of their discs and stand where the truth says', () => {
    const { plane, truth } = drawChart('dots', RIG, { sizePx: 17.3, grid: [5, 4] });
    expect(truth.dots).toHaveLength(20);
    // the levels are float32, right to 3e-8 of their own, and so is the area of 4701 px
    expect(darkArea(plane, truth)).toBeCloseTo(20 * Math.PI * 8.65 ** 2, 3);
    const dark = darkness(plane, truth);
    for (const { x, y, radiusPx } of truth.dots!) {
      let [sum, momentX, momentY] = [0, 0, 0];
      around(plane, [x, y], radiusPx + 2, (i, px, py) => {
        sum += dark[i];
        momentX += dark[i] * px;
        momentY += dark[i] * py;
      });
      expect([momentX / sum, momentY / sum]).toEqual([expect.closeTo(x, 5), expect.closeTo(y, 5)]);
    }
  });

  it('stand on an odd grid of 4 diameters or more by default, one in the middle', () => {
    const { dots } = drawChart('dots', RIG, { oversample: 1 }).truth;
    expect(dots).toHaveLength(3 * 1);
    expect(dots![1]).toEqual({ x: 159.5, y: 119.5, field: 0, azimuthDeg: 0, radiusPx: 12 });
  });
});

describe('star', () => {
  it('has half of its ring dark, sector by sector', () => {
    const { plane, truth } = drawChart('star', RIG, { sectors: 12, sizePx: 150 });
    expect(truth.sectors).toHaveLength(12);
    const { innerPx, outerPx } = truth.sectors![0];
    expect(outerPx).toBe(75);
    expect(innerPx).toBeCloseTo(12 / (2 * Math.PI), 8); // one cycle a pixel
    expect(darkArea(plane, truth)).toBeCloseTo((Math.PI * (outerPx ** 2 - innerPx ** 2)) / 2, 3);
    const [first, second] = truth.sectors!;
    expect([first.fromDeg, first.toDeg, second.fromDeg]).toEqual([7.5, 22.5, 37.5]);
    const angle = (15 * Math.PI) / 180;
    const [column, row] = [159.5 + 40 * Math.cos(angle), 119.5 + 40 * Math.sin(angle)].map((px) =>
      Math.round((px + 0.5) * 4 - 0.5),
    );
    expect(plane.samples[row * plane.width + column]).toBeCloseTo(0.04, 6);
  });
});

describe('bars', () => {
  it('come in groups of five from coarse to fine, along and across the radius', () => {
    const { plane, truth } = drawChart('bars', RIG, {
      sizePx: 20,
      cyclesPerPixel: [0.4, 0.1, 0.2],
      fields: ['0.2@180'],
    });
    const bars = truth.bars!;
    expect(bars).toHaveLength(2 * 3 * 5);
    expect(
      [0, 1, 2, 3, 4, 5].map((group) => bars.find((bar) => bar.group === group)!.cyclesPerPixel),
    ).toEqual([0.1, 0.2, 0.4, 0.1, 0.2, 0.4]);
    const area = bars.reduce((sum, { lengthPx, widthPx }) => sum + lengthPx * widthPx, 0);
    expect(darkArea(plane, truth)).toBeCloseTo(area, 3); // so no two of them overlap
    const dark = darkness(plane, truth);
    let least = 1;
    const along = (bar: (typeof bars)[number]) => (bar.direction === 'tangential' ? bar.x : bar.y);
    for (let group = 0; group < 6; group++) {
      const own = bars.filter((bar) => bar.group === group);
      const places = own.map(along).sort((a, b) => a - b);
      for (let i = 1; i < 5; i++) expect(places[i] - places[i - 1]).toBeCloseTo(1 / own[0].cyclesPerPixel, 8);
      for (const { x, y, runsDeg, direction, widthPx, lengthPx, cyclesPerPixel } of own) {
        expect(widthPx).toBeCloseTo(1 / (2 * cyclesPerPixel), 8);
        expect(runsDeg).toBe(direction === 'tangential' ? 270 : 180);
        // the truth draws the same bar again: every sample well inside of it is dark
        const { halfPlanes } = rectangle(x, y, lengthPx, widthPx, runsDeg);
        around(plane, [x, y], 15, (i, px, py) => {
          if (halfPlanes.every((side) => distanceIn(side, px, py) > 0.2)) least = Math.min(least, dark[i]);
        });
      }
    }
    expect(least).toBeCloseTo(1, 5);
  });
});

describe('checker', () => {
  it('alternates around the axis, with its corners where cells meet', () => {
    const { plane, truth } = drawChart('checker', RIG, { sizePx: 25, angleDeg: 10, oversample: 2 });
    expect(truth.cell).toEqual({ sizePx: 25, angleDeg: 10 });
    expect(truth.corners!.length).toBeGreaterThan(80);
    expect(truth.corners).toContainEqual({ x: 159.5, y: 119.5, field: 0, azimuthDeg: 0 });
    const levelAt = (x: number, y: number) =>
      plane.samples[Math.round((y + 0.5) * 2 - 0.5) * plane.width + Math.round((x + 0.5) * 2 - 0.5)];
    for (const { x, y } of truth.corners!) {
      const around = [0, 90, 180, 270].map((turn) => {
        const angle = ((10 + 45 + turn) * Math.PI) / 180;
        return levelAt(x + 6 * Math.cos(angle), y + 6 * Math.sin(angle));
      });
      expect(around[0]).toBeCloseTo(around[2], 6);
      expect(around[1]).toBeCloseTo(around[3], 6);
      expect(Math.abs(around[0] - around[1])).toBeCloseTo(0.76, 6);
    }
  });
});

describe('refusals', () => {
  it.each([
    [
      'a kind that is none',
      'circles',
      {},
      /KIND: there is no such chart, found 'circles'. Allowed: edges, dots/,
    ],
    ['an oversampling', 'edges', { oversample: 17 }, /--oversample: is out of range, found 17/],
    ['a contrast', 'edges', { contrast: 1 }, /--contrast: is out of range, found 1/],
    ['a white', 'dots', { white: 1.2 }, /--white: is out of range, found 1.2/],
    [
      'an angle that no edge shows',
      'edges',
      { angleDeg: 1 },
      /--angle: is out of range, found 1. Allowed: a number from 2/,
    ],
    [
      'an angle of cells',
      'checker',
      { angleDeg: 46 },
      /--angle: is out of range, found 46. Allowed: a number from 0 to 45/,
    ],
    ['a size', 'dots', { sizePx: 3 }, /--size: is out of range, found 3/],
    ['sectors', 'star', { sectors: 2.5 }, /--sectors: is out of range, found 2.5/],
    ['frequencies', 'bars', { cyclesPerPixel: [0.1, 2] }, /--cycles-per-pixel: is out of range, found 0.1,2/],
    ['a grid', 'edges', { grid: [0, 1] }, /--grid: is out of range, found 0x1/],
    [
      'too many patches',
      'dots',
      { grid: [100, 100] },
      /--grid: is out of range, found 100x100.*at most 2000/,
    ],
    [
      'a choice of another kind',
      'dots',
      { angleDeg: 5 },
      /--angle: means nothing to the chart 'dots', found 5. Allowed: with edges, checker/,
    ],
    [
      'two ways to place',
      'edges',
      { grid: [1, 1], fields: [0] },
      /--fields: says where patches stand, and so does --grid/,
    ],
    ['no place', 'edges', { fields: [] }, /--fields: is out of range, found 0/],
    [
      'a place outside',
      'edges',
      { fields: [0, 0.9] },
      /--fields: a patch there stands over the frame, found '0.9' at \(519/,
    ],
    [
      'places over each other',
      'edges',
      { sizePx: 40, fields: [0, 0.1] },
      /--fields: patches stand too near.*found 40.0 px apart. Allowed: from 80.0/,
    ],
    [
      'a grid too fine',
      'edges',
      { sizePx: 60, grid: [4, 1] },
      /--grid: patches stand too near.*4x1.*found 80.0 px apart/,
    ],
    ['a size over the frame', 'star', { sizePx: 250 }, /--size: the patches stand over the frame/],
    ['cells too many', 'checker', { sizePx: 4 }, /--size: the board has too many cells/],
  ] as [string, ChartKind, ChartChoices, RegExp][])('refuses %s', (_, kind, choices, message) => {
    expect(() => drawChart(kind, RIG, choices)).toThrow(InputError);
    expect(() => drawChart(kind, RIG, choices)).toThrow(message);
  });

  it('tells all faults at once', () => {
    try {
      drawChart('edges', RIG, { contrast: 0, white: 2, sectors: 9 });
      expect.unreachable();
    } catch (error) {
      expect((error as InputError).faults).toHaveLength(3);
    }
  });
});
