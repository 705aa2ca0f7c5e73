import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { appleBelt } from '../../scenes/draw/apple-belt.js';
import { crateTags } from '../../scenes/draw/crate-tags.js';
import { DEMO_SCENES, START_SCENES } from '../../scenes/draw/pictures.js';
import { grey, rasterise, toPng } from '../../scenes/draw/rasterise.js';
import { text, textWidth } from '../../scenes/draw/stroke-font.js';
import { testChart } from '../../scenes/draw/test-chart.js';

const START = fileURLToPath(new URL('../../scenes/start/', import.meta.url));

/** A drawing of `body` on black, a few pixels wide. */
const sketch = (body: string, finer: number) => ({
  width: 4,
  height: 1,
  colour: false,
  finer,
  body: `<rect width="4" height="1" fill="#000"/>${body}`,
  labels: [],
});

describe('rasterise', () => {
  it('gives a pixel half covered by white the sRGB number of half the light', async () => {
    // Source: IEC 61966-2-1:1999 (from memory): 0.5 encodes to 0.735357, and 255 x 0.735357 = 187.5 rounds to 188
    const halfWhite = sketch('<rect x="1" width="1.5" height="1" fill="#fff"/>', 4);
    expect([...(await rasterise(halfWhite))]).toEqual([0, 255, 188, 0]);
  });

  it('leaves an area of one colour as it is, whatever the colour', async () => {
    const codes = Array.from({ length: 256 }, (_, code) => code);
    const bars = codes.map((code) => `<rect x="${code}" width="1" height="1" fill="rgb(${code},0,7)"/>`);
    const samples = await rasterise({
      ...sketch(bars.join(''), 2),
      width: 256,
      colour: true,
    });
    expect([...samples]).toEqual(codes.flatMap((code) => [code, 0, 7]));
  });

  it('joins its strips without a seam', async () => {
    // higher than two strips; one column of a wedge whose lower edge crosses all of them, so that every row differs from the next
    const height = 600;
    const body = `<path d="M0 0H256L0 ${height}Z" fill="#fff"/>`;
    const samples = await rasterise({
      width: 256,
      height,
      colour: false,
      finer: 4,
      body: `<rect width="256" height="${height}" fill="#000"/>${body}`,
      labels: [],
    });
    const light = (row: number) => {
      let sum = 0;
      for (let column = 0; column < 256; column++) sum += linear(samples[row * 256 + column]);
      return sum;
    };
    // the white of a row is 256 (1 - (row + 1/2)/600) pixels wide; 8-bit numbers of partly covered pixels and the renderer's own
    // coverage in steps of 1/255 leave a few hundredths of a pixel
    for (let row = 0; row < height; row++) {
      expect(Math.abs(light(row) - 256 * (1 - (row + 0.5) / height)), `row ${row}`).toBeLessThan(0.1);
    }
  });
});

describe('the scenes', () => {
  it('are the same bytes each time', async () => {
    const small = [
      crateTags({ columns: 1, rows: 3 }),
      appleBelt({ width: 320, height: 330 }),
      testChart({ columns: 1, rows: 5 }),
    ];
    const again = [
      crateTags({ columns: 1, rows: 3 }),
      appleBelt({ width: 320, height: 330 }),
      testChart({ columns: 1, rows: 5 }),
    ];
    for (const [index, drawing] of small.entries()) {
      expect(again[index]).toEqual(drawing);
      expect((await toPng(again[index])).equals(await toPng(drawing)), `scene ${index}`).toBe(true);
    }
  });

  it('differ by seed', () => {
    const belt = (seed: number) => appleBelt({ width: 320, height: 330, seed }).body;
    expect(belt(1)).not.toBe(belt(2));
    const tags = (seed: number) => crateTags({ columns: 1, rows: 3, seed }).body;
    expect(tags(1)).not.toBe(tags(2));
  });

  it('use no font of the machine and no layer of their own for opacity', () => {
    for (const { file, draw } of [...DEMO_SCENES, ...START_SCENES]) {
      expect(draw().body, file).not.toMatch(/<text|font-family| opacity="/);
    }
  });

  it('that the package ships are what the scripts draw', async () => {
    for (const { file, draw } of START_SCENES) {
      const drawing = draw();
      const shipped = sharp(START + file);
      const { width, height, channels } = await shipped.metadata();
      expect({ width, height, channels }, file).toEqual({
        width: drawing.width,
        height: drawing.height,
        channels: drawing.colour ? 3 : 1,
      });
      const samples = await (drawing.colour ? shipped : shipped.extractChannel(0)).raw().toBuffer();
      const drawn = await rasterise(drawing);
      let largest = 0;
      for (let at = 0; at < drawn.length; at++)
        largest = Math.max(largest, Math.abs(drawn[at] - samples[at]));
      // the same machine gives the same bytes; another build of the vector renderer may round a gradient differently
      expect(largest, file).toBeLessThanOrEqual(3);
    }
  });
});

describe('the stroke font', () => {
  it('refuses a letter that it has not', () => {
    expect(() => text('KISTE Ä', { x: 0, y: 0, capHeight: 10 })).toThrow("no letter 'Ä'");
  });

  it('measures a line as the sum of its letters and gaps', () => {
    expect(textWidth('I', 100)).toBe(0); // one upright stroke
    expect(textWidth('HI', 50)).toBe((58 + 30) / 2);
    expect(textWidth('H H', 100)).toBe(58 + 30 + 44 + 58);
  });

  it('places a line by its start, middle or end', () => {
    const left = (anchor: 'start' | 'middle' | 'end') =>
      Number(/translate\(([-\d.]+) /.exec(text('HI', { x: 200, y: 0, capHeight: 50, anchor }))?.[1]);
    expect([left('start'), left('middle'), left('end')]).toEqual([200, 178, 156]);
  });
});

describe('grey', () => {
  it('is the sRGB number of a reflectance', () => {
    // Source: IEC 61966-2-1:1999 (from memory): 0.18 encodes to 0.461356, 118 of 255
    expect([grey(0), grey(0.18), grey(1)]).toEqual(['#000000', '#767676', '#ffffff']);
  });
});

function linear(code: number): number {
  const value = code / 255;
  return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
}
