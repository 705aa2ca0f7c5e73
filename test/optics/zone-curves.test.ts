import { describe, expect, it } from 'vitest';
import { frameMap } from '../../src/optics/frame-map.js';
import { zoneCurves } from '../../src/optics/zone-curves.js';
import { zonesOf } from '../../src/optics/zones.js';
import { sampleRig } from './samples.js';

const WAVES = { W040: 0.4, W131: 1.5, W222: 1.2, W220: 0.5, W311: 8 };
const BANDS = [
  { name: 'red', lines: [{ nm: 620, weight: 1 }] },
  { name: 'blue', lines: [{ nm: 460, weight: 1 }] },
];

describe('curves of zones', () => {
  const rig = sampleRig({ waves: WAVES, camera: { bands: BANDS }, lens: { axialUm: [[460, 9]] } });
  const report = zonesOf(rig);
  const curves = zoneCurves(rig, report);
  const corner = report.zones.filter(({ place }) => place === 'top_right');

  it('end at the figures of axis and corner', () => {
    for (const { band, lpPerMm, mtf } of curves.height.curves) {
      const figureOf = (zone: (typeof report.zones)[number]) =>
        zone.mtf.find((entry) => entry.lpPerMm === lpPerMm)!.camera;
      const onAxis = figureOf(report.zones.find((zone) => zone.field === 0 && zone.band === band)!);
      const outside = figureOf(corner.find((zone) => zone.band === band)!);
      // the same formula at the same point, which lies in another corner: rounding only
      expect(mtf.tangential[0]).toBeCloseTo(onAxis.tangential, 12);
      expect(mtf.tangential.at(-1)).toBeCloseTo(outside.tangential, 9);
      expect(mtf.sagittal.at(-1)).toBeCloseTo(outside.sagittal, 9);
    }
    const best = curves.height.bestFocus.map(({ um }) => um.tangential.at(-1));
    expect(best[0]).toBeCloseTo(corner[0].bestFocusUm.tangential!, 3);
    expect(best[1]).toBeCloseTo(corner[1].bestFocusUm.tangential!, 3);
  });

  it('meet the figures of the zones at their frequencies', () => {
    const { lpPerMm, curves: byZone } = curves.frequency;
    const half = report.zones[0].mtf.at(-1)!.lpPerMm; // half a cycle a pixel ends the curves
    expect(lpPerMm.at(-1)).toBeCloseTo(half, 9);
    for (const [at, zone] of report.zones.entries()) {
      expect(byZone[at].mtf.tangential[0]).toBeCloseTo(1, 6); // a computed OTF is right to 2e-7
      expect(byZone[at].mtf.tangential.at(-1)).toBeCloseTo(zone.mtf.at(-1)!.camera.tangential, 9);
      expect(byZone[at].diffractionLimit.at(-1)).toBeCloseTo(zone.mtf.at(-1)!.diffractionLimit, 12);
    }
  });

  it('rise to best focus', () => {
    const { shiftUm, curves: byZone, lpPerMm } = curves.focus;
    expect(lpPerMm).toBe(report.zones[0].mtf[1].lpPerMm);
    const step = shiftUm[1] - shiftUm[0];
    for (const [at, zone] of report.zones.entries()) {
      const highest = shiftUm[byZone[at].sagittal.indexOf(Math.max(...byZone[at].sagittal))];
      expect(Math.abs(highest - zone.bestFocusUm.sagittal!)).toBeLessThanOrEqual(step); // next to the peak
    }
  });

  it('bend the grid by the stated factor of the distortion', () => {
    const { grid, percent } = curves.distortion;
    expect(grid.frameMm[0]).toBeCloseTo(6.9, 12);
    expect(grid.frameMm[1]).toBeCloseTo(5.175, 12);
    const { ideal, bent } = grid.lines[0];
    const share = (Math.hypot(...bent[0]) - Math.hypot(...ideal[0])) / Math.hypot(...ideal[0]);
    // the grid's corner lies half a pixel farther out than the curve's end: 3e-4 of the height, twice that in percent
    expect(share / (grid.factor * (percent.at(-1)! / 100))).toBeCloseTo(1, 2);
    const none = sampleRig({ waves: { W040: 1 } });
    expect(zoneCurves(none, zonesOf(none)).distortion.grid.factor).toBe(0);
  });
});

describe('the map of the frame', () => {
  const rig = sampleRig({ waves: WAVES });

  it('shows edges and corners as zones do', () => {
    const { zones } = zonesOf(rig, { fields: ['top_left', 'right', 'axis'] });
    const lpPerMm = zones[0].mtf.map((entry) => entry.lpPerMm);
    const { columns, rows, cells } = frameMap(rig, lpPerMm);
    expect([columns, rows]).toEqual([9, 7]);
    const shown = [cells[0], cells[3 * 9 + 8], cells[3 * 9 + 4]];
    for (const [at, zone] of zones.entries()) {
      const [figures] = shown[at].bands;
      expect(shown[at].wavefrontRmsWaves).toBeCloseTo(zone.wavefrontRmsWaves, 9);
      for (const [i, { camera }] of zone.mtf.entries()) {
        expect(figures.mtf[i].tangential).toBeCloseTo(camera.tangential, 9);
        expect(figures.mtf[i].sagittal).toBeCloseTo(camera.sagittal, 9);
      }
    }
  });

  it('comes out the same where its symmetry is not used', () => {
    const folded = frameMap(rig, [70]).cells;
    // too small a tilt to change a figure, enough not to count as symmetric
    const whole = frameMap(sampleRig({ waves: WAVES, mount: { sensorTiltDeg: [1e-12, 0] } }), [70]).cells;
    expect(folded.filter(({ twin }, i) => twin === i)).toHaveLength(20);
    expect(whole.every(({ twin }, i) => twin === i)).toBe(true);
    for (const [i, cell] of folded.entries())
      expect(cell.bands[0].mtf[0].tangential).toBeCloseTo(whole[i].bands[0].mtf[0].tangential, 9);
  });

  it.each([
    [
      [4000, 400],
      [9, 3],
    ],
    [
      [400, 4000],
      [3, 9],
    ],
    [
      [640, 480],
      [9, 7],
    ],
  ])('divides %j pixels into %j cells', (pixels, counts) => {
    const { columns, rows } = frameMap(sampleRig({ camera: { pixels: pixels as [number, number] } }), [50]);
    expect([columns, rows]).toEqual(counts);
  });
});
