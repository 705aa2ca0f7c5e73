import { describe, expect, it } from 'vitest';
import { renderSummary } from '../../src/report/render-summary.js';
import { startSummary } from '../../src/report/start-summary.js';

const RECORD = {
  threads: 2,
  image: { width: 2448, height: 2048, bands: ['mono'] },
  accuracy: { blendBound: 0.00312, energyOutsideKernel: 0.0041, cells: [14, 11], kernelPx: 64 },
  seconds: { decode: 0.25, psf: 0.1, warp: 0.1, blur: 0.5, camera: 0.3, encode: 0.5, total: 1 },
};

describe('renderSummary', () => {
  it('tells what was written, how exact it is and how long it took', () => {
    const summary = renderSummary(RECORD, ['a.png', undefined, 'a.json']);
    for (const line of summary.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
    const words = summary.replaceAll('\n', ' ');
    expect(words).toContain('Wrote a.png, a.json: 2448 x 2048 pixels, mono. ');
    expect(words).toContain(
      'no pixel is off by more than 0.0031 of full scale from blending PSFs (14 x 11 cells); 0.41 % of the energy',
    );
    expect(words).toContain('outside the kernel of 64 pixels and is given back by normalising. ');
    expect(words).toContain('Time: 1.00 s on 2 threads, and 0.75 s to read and write pictures. ');
  });

  it('carries the limits of the model', () => {
    expect(renderSummary(RECORD, ['a.png'])).toContain('third order');
  });
});

describe('startSummary', () => {
  it('names the files and gives command lines that fit them', () => {
    const text = startSummary({
      folder: "my hall's",
      files: ['.schemas/rig.schema.json', 'packhouse.rig.yaml', 'read.task.yaml', 'scenes/tags.png'],
    });
    expect(text).toContain('  packhouse.rig.yaml\n  read.task.yaml\n  scenes/tags.png\n');
    expect(text).not.toContain('rig.schema.json');
    expect(text).toContain("  cd 'my hall'\\''s'\n");
    expect(text).toContain('  foreglass zones --rig packhouse.rig.yaml\n');
    expect(text).toContain('  foreglass render scenes/tags.png --rig packhouse.rig.yaml --out picture.png\n');
  });

  it('takes the scene that bears the name of the rig', () => {
    const text = startSummary({
      folder: 'hall',
      files: ['scenes/apples.png', 'scenes/tags/a.png', 'tags.rig.yaml'],
    });
    expect(text).toContain('  foreglass render scenes/tags/a.png --rig tags.rig.yaml --out picture.png\n');
  });

  it('does not speak of files that are not there', () => {
    const text = startSummary({ folder: 'hall', files: ['a.task.yaml'] });
    expect(text).not.toContain('foreglass');
    expect(text).not.toContain('schemas');
  });
});
