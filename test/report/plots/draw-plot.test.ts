import { parseHTML } from 'linkedom';
import { describe, expect, it } from 'vitest';
import { drawPlot, type Figure } from '../../../src/report/plots/draw-plot.js';
import { FAINT, INK, PAGE, PLOT_CLASS } from '../../../src/report/plots/theme.js';

const FIGURE: Figure = {
  title: 'A line & its <end>',
  subtitle: 'below it',
  description: 'A line that rises.',
  widthPx: 300,
  heightPx: 200,
  plot: (Plot) => ({ marks: [Plot.lineY([1, 2, 4], { clip: true }), Plot.dotY([1, 2, 4], { clip: true })] }),
};

const rootOf = (svg: string) => parseHTML(svg).document.querySelector('svg')!;

describe('drawPlot', () => {
  it('draws the figure below its heading, in a page of its own colour', async () => {
    const svg = await drawPlot(FIGURE);
    const root = rootOf(svg);
    expect(svg.endsWith('</svg>\n')).toBe(true);
    const attributes = ['xmlns', 'width', 'height', 'viewBox', 'class', 'color', 'role', 'aria-label'];
    expect(attributes.map((name) => root.getAttribute(name))).toEqual([
      'http://www.w3.org/2000/svg',
      '300',
      '246', // 200 and a heading of two lines
      '0 0 300 246',
      PLOT_CLASS,
      INK.light,
      'img',
      FIGURE.title,
    ]);
    expect(root.querySelector('rect')?.getAttribute('fill')).toBe(PAGE.light);
    expect(root.querySelector('desc')?.textContent).toBe('A line that rises.');
    const texts = [...root.querySelectorAll('text')].map(({ textContent }) => textContent);
    expect(texts.slice(-2)).toEqual(['A line & its <end>', 'below it']);
    expect(root.querySelectorAll('circle')).toHaveLength(3);
    expect(svg).toContain(FAINT.light);
  });

  it('has room for one line where there is no second', async () => {
    expect(rootOf(await drawPlot({ ...FIGURE, subtitle: undefined })).getAttribute('height')).toBe('226');
  });

  it('is the same text each time, and its ids bear the name that the page gives', async () => {
    const svg = await drawPlot(FIGURE);
    expect(await drawPlot(FIGURE)).toBe(svg);
    const ids = (text: string) => [...text.matchAll(/id="([^"]+)"/g)].map(([, id]) => id);
    expect(ids(svg)).toEqual(['plot-clip-1']);
    const named = await drawPlot({ ...FIGURE, id: 'mtf' });
    expect(ids(named)).toEqual(['mtf-clip-1']);
    for (const id of ids(named)) expect(named).toContain(`url(#${id})`);
    expect(named).not.toContain('plot-clip');
  });
});
