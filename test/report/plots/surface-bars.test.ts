import { parseHTML } from 'linkedom';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { derive } from '../../../src/jobs/derive.js';
import { SEIDEL_SUMS } from '../../../src/prescription/seidel.js';
import { surfaceBars } from '../../../src/report/plots/surface-bars.js';
import { INK, PAGE, SERIES } from '../../../src/report/plots/theme.js';
import { packhouseLens, singlet } from '../../prescription/lenses.js';

const { report } = derive(packhouseLens(), { wavelengthsNm: [], fields: [0, 1] });
const svg = await surfaceBars(report);
const { document } = parseHTML(svg);

/** Left and right of every bar from the middle of its column, with what it says of itself. */
function barsOf(page: typeof document) {
  return [...page.querySelectorAll('rect[aria-label]')].map((bar) => ({
    label: bar.getAttribute('aria-label') ?? '',
    fill: bar.getAttribute('fill'),
    width: Number(bar.getAttribute('width')),
  }));
}

describe('surfaceBars', () => {
  it('draws a bar for each surface and the total of each sum, as long as it is large', () => {
    const bars = barsOf(document);
    expect(bars).toHaveLength(7 * 8);
    for (const name of SEIDEL_SUMS) {
      const values = [...report.surfaces, report.seidelMm].map((sums) => Math.abs(1000 * sums[name]));
      const column = bars.filter(({ label }) => label.startsWith(`${name}, `));
      const longest = Math.max(...column.map(({ width }) => width));
      expect(longest).toBeGreaterThan(40);
      column.forEach(({ width }, i) => {
        // coordinates have limited digits
        expect(width / longest).toBeCloseTo(values[i] / Math.max(...values), 3);
      });
      expect(column[7].fill).toBe(SERIES[1].light);
      expect(column[0].fill).toBe(SERIES[0].light);
      expect(svg).toContain(`\u00b1${Number(Math.max(...values).toPrecision(3))} um`);
    }
  });

  it('bars to the right are positive, to the left negative', () => {
    const middle = (label: string) => {
      const bar = [...document.querySelectorAll('rect[aria-label]')].find((one) =>
        one.getAttribute('aria-label')?.startsWith(label),
      )!;
      return Number(bar.getAttribute('x')) + Number(bar.getAttribute('width')) / 2;
    };
    const zero = middle('S_I, 5 stop'); // a bar of no length
    expect(report.surfaces[0].S_I).toBeGreaterThan(0);
    expect(middle('S_I, 1:')).toBeGreaterThan(zero);
    expect(report.surfaces[2].S_I).toBeLessThan(0);
    expect(middle('S_I, 3:')).toBeLessThan(zero);
  });

  it('says in words what it shows', () => {
    expect(document.querySelector('svg > title')?.textContent).toBe(
      'What each surface contributes: three-element lens, packing hall',
    );
    const words = document.querySelector('svg > desc')?.textContent;
    expect(words).toMatch(/spherical \(S_I\) most from surface 3 \(-27\.5 um\), in total 10\.4 um;/);
    expect(document.querySelector('svg')?.getAttribute('role')).toBe('img');
  });

  it('is the same text each time, and a picture to any program that reads SVG', async () => {
    expect(await surfaceBars(report)).toBe(svg);
    expect(svg).not.toMatch(/NaN|Infinity|undefined/);
    const { data, info } = await sharp(Buffer.from(svg))
      .removeAlpha()
      .raw()
      .toBuffer({ resolveWithObject: true });
    const colours = new Set<string>();
    for (let i = 0; i < data.length; i += info.channels)
      colours.add(`#${data.subarray(i, i + 3).toString('hex')}`);
    for (const colour of [PAGE.light, INK.light, SERIES[0].light, SERIES[1].light])
      expect(colours).toContain(colour);
  });

  it('draws a lens whose glass has no dispersion: columns without a bar', async () => {
    const surfaces = singlet().surfaces.map((s) => ({ ...s, glass: s.glass && { n: 1.5168 } }));
    const plain = await surfaceBars(derive({ ...singlet(), surfaces }, { wavelengthsNm: [] }).report);
    expect(plain.match(/>none</g)).toHaveLength(2); // axial and lateral colour
    expect(plain).not.toMatch(/NaN/);
  });

  it('takes a name as it is', async () => {
    const name = 'a & b <script>"c"</script>';
    const named = await surfaceBars({ ...report, name });
    expect(parseHTML(named).document.querySelector('svg > title')?.textContent).toContain(name);
    expect(named).not.toContain('<script>');
    expect(named).not.toMatch(/&(?!(amp|lt|gt|quot|#\d+);)/);
    await sharp(Buffer.from(named)).metadata(); // well-formed, or it would throw
  });
});
