import { createHash } from 'node:crypto';
import {
  copyFileSync,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it, test, vi } from 'vitest';
import type { PictureEntry } from '../../src/dataset/entry.js';
import { formatFault } from '../../src/errors.js';
import { loadRig } from '../../src/files/load-rig.js';
import { readScene } from '../../src/files/pictures/index.js';
import {
  type DatasetOptions,
  type DatasetProgress,
  dataset,
  forecastDataset,
  mergeDataset,
} from '../../src/jobs/dataset.js';
import { render } from '../../src/jobs/render.js';
import { BUSY_MS } from '../support/form.js';
import { contents, RECIPE, records, type Site, smallSite } from './small-dataset.js';

vi.setConfig({ testTimeout: BUSY_MS, hookTimeout: BUSY_MS });

let site: Site;
/** A finished data set that the tests do not touch. */
let whole: string;
beforeAll(async () => {
  site = await smallSite();
  whole = site.path('whole');
  await make('whole', { threads: 2 });
});
afterAll(() => site.remove());

function make(out: string, options: Partial<DatasetOptions> = {}) {
  return dataset({ recipe: site.path('a.recipe.yaml'), out: site.path(out), threads: 1, ...options });
}

/** Another recipe in the same folder. */
function recipe(name: string, text: string): string {
  return site.write(`${name}.recipe.yaml`, text);
}

async function faultsOf(run: Promise<unknown>): Promise<string[]> {
  const error = await run.then(
    () => undefined,
    (reason: { faults?: Parameters<typeof formatFault>[0][] }) => reason,
  );
  expect(error?.faults).toBeDefined();
  return error!.faults!.map((fault) => formatFault(fault).replaceAll(`${site.path('')}/`, ''));
}

describe('a data set', () => {
  it('holds pictures, labels, records and a page about them, and nothing else', () => {
    const names = [...contents(whole).keys()];
    const images = Array.from({ length: 8 }, (_, i) => `images/000000${i + 1}.png`);
    expect(names.sort()).toEqual([...images, 'dataset.json', 'labels.json', 'records.jsonl'].sort());
    expect(existsSync(join(whole, '.work'))).toBe(false);
  });

  it('says how it was made, and the checksums are true', () => {
    const about = JSON.parse(readFileSync(join(whole, 'dataset.json'), 'utf8'));
    expect(about).toMatchObject({
      count: 8,
      pictures: 8,
      redrawn: 0,
      made_from: {
        recipe: { seed: 7, vary: { 'lens.waves.W131': { kind: 'normal', mean: 0.2, deviation: 0.05 } } },
        rigs: [{ file: 'a.rig.yaml', rig: { lens: { f_number: 4 } } }],
        scenes: [{ file: 'a.png' }, { file: 'b.png' }, { file: 'c.png' }],
      },
    });
    const sha = (data: string | Buffer) => createHash('sha256').update(data).digest('hex');
    for (const [name, checksum] of Object.entries(about.files))
      expect(sha(readFileSync(join(whole, name)))).toBe(checksum);
    const pictures = records(whole).map(({ file, sha256, bytes }) => {
      const data = readFileSync(join(whole, 'images', file));
      expect([sha(data), data.length]).toEqual([sha256, bytes]);
      return `${sha256}\n`;
    });
    expect(sha(pictures.join(''))).toBe(about.pictures_sha256);
  });

  it('has a record for each picture, with every value and the truth about every label', () => {
    for (const [index, entry] of records(whole).entries()) {
      expect(entry).toMatchObject({
        picture: index + 1,
        scene: `${'abc'[index % 3]}.png`,
        rig: 'a.rig.yaml',
        redrawn: 0,
        values: { 'lens.waves.W131': expect.any(Number), 'mount.sensor_shift_um': expect.any(Number) },
        width: 48,
        height: 32,
      });
      expect(entry.accuracy.blend_bound).toBeLessThan(0.05);
      for (const { truth } of entry.labels) {
        expect(truth.share_left).toBeGreaterThanOrEqual(0.2);
        expect(truth.blur_px.tangential).toBeGreaterThan(0.5);
        expect(truth.mtf50_cycles_per_pixel.sagittal).toBeGreaterThan(0.1);
        expect(truth.field).toBeLessThan(0.6);
      }
    }
  });

  it('numbers its labels through, and keeps the keys of the user', () => {
    const { images, annotations, categories } = JSON.parse(readFileSync(join(whole, 'labels.json'), 'utf8'));
    const all = records(whole).flatMap(({ picture, labels }) => labels.map((label) => ({ picture, label })));
    expect(images.map(({ file_name }: { file_name: string }) => file_name)).toEqual(
      records(whole).map(({ file }) => file),
    );
    expect(categories).toHaveLength(2);
    expect(annotations).toHaveLength(all.length);
    for (const [index, { picture, label }] of all.entries()) {
      const { truth: _truth, ...inFile } = label;
      expect(annotations[index]).toEqual({ ...inFile, id: index + 1, image_id: picture });
    }
    expect(annotations.some(({ text }: { text?: string }) => text?.startsWith('box '))).toBe(true);
    const { labels, dropped } = JSON.parse(readFileSync(join(whole, 'dataset.json'), 'utf8'));
    expect(labels + dropped.cut + dropped.outside).toBe(8 * 3);
  });
});

describe('a picture depends on recipe, seed and number alone', () => {
  test('not on the number of threads', async () => {
    await make('one', { threads: 1 });
    expect(contents(site.path('one'))).toEqual(contents(whole));
  });

  test('not on the count: a recipe that grows keeps its pictures', async () => {
    const path = recipe('grows', RECIPE.replace('count: 8', 'count: 3'));
    const out = site.path('grows');
    await dataset({ recipe: path, out, threads: 1 });
    const before = contents(out);
    for (const name of ['0000001', '0000002', '0000003'])
      expect(before.get(`images/${name}.png`)).toBe(contents(whole).get(`images/${name}.png`));
    recipe('grows', RECIPE);
    const record = await dataset({ recipe: path, out, threads: 1 });
    expect(record).toMatchObject({ kept: 3, made: 5, damaged: 0 });
    expect(contents(out)).toEqual(contents(whole));
  });

  test('but on the seed', async () => {
    const out = site.path('seed');
    await dataset({
      recipe: recipe('seed', RECIPE.replace('seed: 7', 'seed: 8').replace('count: 8', 'count: 1')),
      out,
      threads: 1,
    });
    expect(contents(out).get('images/0000001.png')).not.toBe(contents(whole).get('images/0000001.png'));
  });

  test('it is what render makes, where nothing is varied', async () => {
    const text = `rig: colour.rig.yaml\nscenes: { images: scenes }\ncount: 1\noutput: { picture: linear }\n`;
    const out = site.path('rendered');
    await dataset({ recipe: recipe('rendered', text), out, threads: 1 });
    const [{ seed, camera_seed }] = records(out);
    await render({
      rig: loadRig(site.path('colour.rig.yaml')),
      scene: site.path('scenes/a.png'),
      out: site.path('rendered.png'),
      linear: true,
      seed,
      cameraSeed: camera_seed,
    });
    expect(
      readFileSync(join(out, 'images/0000001.png')).equals(readFileSync(site.path('rendered.png'))),
    ).toBe(true);
  });
});

describe('work is never lost', () => {
  const copyOfWhole = (name: string) => {
    const out = site.path(name);
    mkdirSync(join(out, 'images'), { recursive: true });
    for (const file of readdirSync(whole).filter((file) => file.includes('.')))
      copyFileSync(join(whole, file), join(out, file));
    for (const file of readdirSync(join(whole, 'images')))
      copyFileSync(join(whole, 'images', file), join(out, 'images', file));
    return out;
  };

  test('a finished set is verified and left as it is', async () => {
    const out = copyOfWhole('again');
    const stages: DatasetProgress[] = [];
    const record = await make('again', { onProgress: (progress) => stages.push(progress) });
    expect(record).toMatchObject({ kept: 8, made: 0, damaged: 0, counts: { pictures: 8 } });
    expect(contents(out)).toEqual(contents(whole));
    expect(stages.at(-1)).toEqual({ stage: 'verify', done: 8, total: 8 });
  });

  test('damaged pictures are made again: cut short, changed, gone', async () => {
    const out = copyOfWhole('damaged');
    const image = (name: string) => join(out, 'images', name);
    const data = readFileSync(image('0000002.png'));
    writeFileSync(image('0000002.png'), data.subarray(0, 100));
    const other = readFileSync(image('0000004.png'));
    other[other.length - 20] ^= 1;
    writeFileSync(image('0000004.png'), other);
    rmSync(image('0000007.png'));
    expect(await make('damaged')).toMatchObject({ kept: 5, made: 3, damaged: 3 });
    expect(contents(out)).toEqual(contents(whole));
  });

  test('labels that are gone are written again without a picture being made', async () => {
    const out = copyOfWhole('unlabelled');
    rmSync(join(out, 'labels.json'));
    expect(await make('unlabelled')).toMatchObject({ kept: 8, made: 0 });
    expect(contents(out)).toEqual(contents(whole));
  });

  test('records that were changed are not trusted', async () => {
    const out = copyOfWhole('records');
    const text = readFileSync(join(out, 'records.jsonl'), 'utf8');
    writeFileSync(join(out, 'records.jsonl'), text.replace('"text":"box 1"', '"text":"box 9"'));
    expect(await make('records')).toMatchObject({ kept: 0, made: 8 });
    expect(contents(out)).toEqual(contents(whole));
  });

  test('a run that was stopped goes on; so does one that a crash has left a torn line of', async () => {
    const out = site.path('stopped');
    const stop = new AbortController();
    const run = make('stopped', {
      signal: stop.signal,
      onProgress: ({ stage, done }) => stage === 'pictures' && done === 3 && stop.abort(),
    });
    await expect(run).rejects.toMatchObject({ name: 'InterruptedError' });
    const [journal] = readdirSync(join(out, '.work')).filter((name) => name.endsWith('.jsonl'));
    const path = join(out, '.work', journal);
    const lines = readFileSync(path, 'utf8');
    expect(lines.trim().split('\n').length).toBeGreaterThanOrEqual(3);
    writeFileSync(path, lines.slice(0, -40)); // the last line was on its way
    writeFileSync(join(out, 'images', '.0123456789abcdef.part.png'), 'half a picture');
    const record = await make('stopped');
    expect(record.kept).toBe(lines.trim().split('\n').length - 1);
    expect(contents(out)).toEqual(contents(whole));
  });

  test('a limit makes the first pictures, complete in themselves; without it the rest follows', async () => {
    const out = site.path('limited');
    const first = await make('limited', { limit: 2 });
    expect(first).toMatchObject({ made: 2, counts: { pictures: 2 } });
    expect(records(out)).toHaveLength(2);
    expect(JSON.parse(readFileSync(join(out, 'labels.json'), 'utf8')).images).toHaveLength(2);
    expect(await make('limited')).toMatchObject({ kept: 2, made: 6 });
    expect(contents(out)).toEqual(contents(whole));
    expect(await make('limited', { limit: 2 })).toMatchObject({ kept: 8, made: 0, counts: { pictures: 8 } }); // takes nothing away
  });

  test('another recipe is refused with all that differs; --fresh begins anew', async () => {
    const out = copyOfWhole('other');
    site.write('b.rig.yaml', readFileSync(site.path('a.rig.yaml'), 'utf8').replace('W311: 3', 'W311: 2'));
    const text = RECIPE.replace('uniform: [-20, 20]', 'uniform: [-20, 25]')
      .replace('a.rig.yaml', 'b.rig.yaml')
      .replace('count: 8', 'count: 2');
    const path = recipe('other', text);
    expect(await faultsOf(dataset({ recipe: path, out }))).toEqual([
      'other: was begun from another recipe, which differs in 4 places. Choose another folder, go back to that recipe, or say --fresh to begin anew.',
      'recipe.vary.mount.sensor_shift_um.high: was 20, found 25.',
      'rigs[0].file: was "a.rig.yaml", found "b.rig.yaml".',
      'rigs[0].rig.lens.waves.W311: was 3, found 2.',
      'count: was 8 and can only grow, found 2.',
    ]);
    expect(contents(out)).toEqual(contents(whole)); // untouched
    await dataset({ recipe: path, out, fresh: true, threads: 1 });
    expect([...contents(out).keys()]).toHaveLength(5);
  });

  test('a scene that has changed is another recipe, too', async () => {
    const other = await smallSite();
    try {
      const options = { recipe: other.path('a.recipe.yaml'), out: other.path('out'), threads: 1, limit: 1 };
      await dataset(options);
      copyFileSync(other.path('scenes/a.png'), other.path('scenes/b.png'));
      const [, ...faults] = await faultsOf(dataset(options));
      expect(faults.every((fault) => fault.startsWith('scenes[1].'))).toBe(true);
      expect(faults.length).toBeGreaterThan(0);
    } finally {
      other.remove();
    }
  });

  test('a folder with things of somebody else is left alone, also by --fresh', async () => {
    mkdirSync(site.path('foreign/images'), { recursive: true });
    const words = [
      'foreign: holds things that no run of this command has left, found images. Choose another folder.',
    ];
    expect(await faultsOf(make('foreign'))).toEqual(words);
    expect(await faultsOf(make('foreign', { fresh: true }))).toEqual(words);
    site.write('file', '');
    expect(await faultsOf(make('file'))).toEqual(['file: is a file, not a folder.']);
  });
});

describe('shards', () => {
  test('together they are the whole, in any order, also where two did the same', async () => {
    const recipeFile = site.path('a.recipe.yaml');
    const out = site.path('shards');
    expect(await make('shards', { shard: { index: 2, of: 3 } })).toMatchObject({ pictures: 3, made: 3 });
    expect(await faultsOf(mergeDataset({ recipe: recipeFile, out }))).toEqual([
      'shards: 5 of 8 pictures are missing or damaged, found without 1, 3, 4, 6, 7. Run the shards that lack some again, with the same recipe and the same --out.',
    ]);
    await Promise.all([
      make('shards', { shard: { index: 1, of: 3 } }),
      make('shards', { shard: { index: 3, of: 3 } }),
    ]);
    await make('shards', { shard: { index: 1, of: 2 } });
    expect(existsSync(join(out, 'labels.json'))).toBe(false);
    expect(await mergeDataset({ recipe: recipeFile, out })).toMatchObject({
      kept: 8,
      counts: { pictures: 8 },
    });
    expect(contents(out)).toEqual(contents(whole));
  });
});

describe('what the recipe says of the pictures', () => {
  const made = async (name: string, change: (text: string) => string): Promise<PictureEntry[]> => {
    const out = site.path(name);
    await dataset({ recipe: recipe(name, change(RECIPE.replace('count: 8', 'count: 2'))), out, threads: 1 });
    return records(out);
  };

  test.each([
    ['jpeg', 'format: jpeg, quality: 80', 8, 3, 'jpg'],
    ['webp', 'format: webp', 8, 3, 'webp'],
    ['tiff', 'format: tiff', 16, 3, 'tif'],
  ])('%s', async (name, words, bitDepth, channels, ending) => {
    const entries = await made(name, (text) =>
      text.replace('a.rig', 'colour.rig').replace('size: [48, 32]', `size: [48, 32], ${words}`),
    );
    expect(entries[1].file).toBe(`0000002.${ending}`);
    const scene = await readScene(join(site.path(name), 'images', entries[1].file), { sceneLinear: true });
    expect(scene).toMatchObject({ bitDepth, channels, raster: { width: 48, height: 32 } });
  });

  test('raw numbers under a mosaic, with what they mean', async () => {
    site.write(
      'rggb.rig.yaml',
      readFileSync(site.path('colour.rig.yaml'), 'utf8').replace('bands_nm', 'mosaic: rggb\n  bands_nm'),
    );
    const entries = await made('raw', (text) =>
      text.replace('a.rig', 'rggb.rig').replace('size: [48, 32]', 'size: [48, 32], picture: raw'),
    );
    expect(entries[0].raw_levels).toMatchObject({ white_level: 4095 });
    expect(entries.every(({ window: [x, y] }) => x % 2 === 0 && y % 2 === 0)).toBe(true);
    const { raster, channels, bitDepth } = await readScene(
      join(site.path('raw'), 'images', entries[0].file),
      { sceneLinear: true },
    );
    expect([channels, bitDepth]).toEqual([1, 16]);
    expect(Math.max(...raster.planes[0]) * 65535).toBeLessThanOrEqual(4095);
  });

  test('parts that never show the same scene, each with labels of its own', async () => {
    const out = site.path('parts');
    await dataset({
      recipe: recipe('parts', RECIPE.replace('seed: 7', 'seed: 7\nshares: { train: 3, val: 1 }')),
      out,
      threads: 1,
    });
    const scenes = (split: string) =>
      new Set(
        records(out)
          .filter((entry) => entry.split === split)
          .map(({ scene }) => scene),
      );
    expect([...scenes('train'), ...scenes('val')].sort()).toEqual(['a.png', 'b.png', 'c.png']);
    const { splits } = JSON.parse(readFileSync(join(out, 'dataset.json'), 'utf8'));
    expect([splits.train.pictures, splits.val.pictures]).toEqual([6, 2]);
    const images = ['train', 'val'].map(
      (split) => JSON.parse(readFileSync(join(out, `labels-${split}.json`), 'utf8')).images.length,
    );
    expect(images).toEqual([6, 2]);
    expect(existsSync(join(out, 'labels.json'))).toBe(false);
  });

  test('no labels; several rigs in turn, which meet every scene', async () => {
    const entries = await made('plain', (text) =>
      text
        .replace('rig: a.rig.yaml', 'rig: [a.rig.yaml, colour.rig.yaml]')
        .replace('count: 2', 'count: 6')
        .replace('size: [48, 32]', 'size: [48, 32], labels: none'),
    );
    expect(existsSync(join(site.path('plain'), 'labels.json'))).toBe(false);
    expect(entries.every(({ labels }) => labels.length === 0)).toBe(true);
    expect(new Set(entries.map(({ scene, rig }) => `${scene} ${rig}`)).size).toBe(6);
  });

  test('values that make no rig that works are drawn anew, and counted', async () => {
    // each key alone leaves a lens that works; many pairs of the two fold the picture over itself
    const entries = await made('redrawn', (text) =>
      text
        .replace('lens.waves.W131: { normal: [0.2, 0.05] }', 'lens.waves.W311: { uniform: [0, 75] }')
        .replace(
          'mount.sensor_shift_um: { uniform: [-20, 20] }',
          'lens.full_field_mm: { uniform: [0.21, 0.6] }',
        )
        .replace('count: 2', 'count: 4'),
    );
    const redrawn = entries.filter(({ redrawn }) => redrawn > 0).length;
    expect(redrawn).toBeGreaterThan(0);
    expect(JSON.parse(readFileSync(join(site.path('redrawn'), 'dataset.json'), 'utf8')).redrawn).toBe(
      redrawn,
    );
  });
});

describe('a forecast', () => {
  it('tells pictures, bytes and time, and writes nothing', async () => {
    const options = { recipe: site.path('a.recipe.yaml'), out: site.path('forecast'), threads: 1 };
    const forecast = await forecastDataset(options);
    expect(forecast).toMatchObject({ pictures: 8, kept: 0 });
    const bytes = [...contents(whole).values()].reduce((sum, data) => sum + data.length, 0);
    expect(forecast.bytes / bytes).toBeGreaterThan(0.7); // four pictures stand for eight
    expect(forecast.bytes / bytes).toBeLessThan(1.4);
    expect(forecast.seconds).toBeGreaterThan(0);
    expect(existsSync(options.out)).toBe(false);
    expect(await forecastDataset({ ...options, out: whole })).toMatchObject({
      pictures: 0,
      kept: 8,
      bytes: 0,
    });
  });
});

describe('refused before any work', () => {
  const refused = (name: string, change: (text: string) => string) =>
    faultsOf(dataset({ recipe: recipe(name, change(RECIPE)), out: site.path(`not-${name}`), threads: 1 }));

  test.each<[string, (text: string) => string, string]>([
    [
      'a window larger than the sensor',
      (text) => text.replace('[48, 32]', '[81, 32]'),
      'a.rig.yaml: output.size: is larger than the sensor, found 81 x 32. Allowed: up to 80 x 60.',
    ],
    [
      'a window that does not fit',
      (text) => text.replace('[48, 32]', '[48, 32], window: [33, 0]'),
      'a.rig.yaml: output.window: lets the picture end outside of the sensor, found [33, 0]. Allowed: up to [32, 28].',
    ],
    [
      'values that make no rig',
      (text) =>
        text.replace('lens.waves.W131: { normal: [0.2, 0.05] }', 'mount.f_number: { uniform: [3, 8] }'),
      "a.rig.yaml: vary.mount.f_number: at 3: mount.f_number: is below the lens's f-number, so the coefficients do not hold, found 3. Allowed: 4 (lens.f_number) or more.",
    ],
    [
      'a distribution without limits',
      (text) =>
        text.replace('lens.waves.W131: { normal: [0.2, 0.05] }', 'mount.f_number: { normal: [5, 1] }'),
      "a.rig.yaml: vary.mount.f_number: at 1: mount.f_number: is below the lens's f-number, so the coefficients do not hold, found 1. Allowed: 4 (lens.f_number) or more. State the limits of the distribution: within: [lowest, highest].",
    ],
    [
      'a lens that folds',
      (text) =>
        text.replace('lens.waves.W131: { normal: [0.2, 0.05] }', 'lens.waves.W311: { uniform: [0, 400] }'),
      'a.rig.yaml: vary.lens.waves.W311: at 400: lens.waves.W311: the distortion folds the picture over itself',
    ],
    [
      'limits that nothing meets',
      (text) => text.replace('normal: [0.2, 0.05]', 'normal: [0.2, 0.05], within: [9, 10]'),
      'vary.lens.waves.W131.within: is too far from the mean for any value to be drawn.',
    ],
    [
      'raw numbers of a camera that has none',
      (text) => text.replace('a.rig', 'colour.rig').replace('[48, 32]', '[48, 32], picture: raw'),
      'colour.rig.yaml: output.picture: a sensor that sees several bands at every pixel has no single raw picture',
    ],
    [
      'more parts than scenes',
      (text) =>
        text
          .replace('labels: labels.json', '')
          .replace('images: scenes,', 'images: one')
          .replace('seed: 7', 'shares: { train: 1, val: 1 }'),
      'shares: there are fewer scenes than parts',
    ],
    [
      'no scene',
      (text) => text.replace('images: scenes, labels: labels.json', 'images: none'),
      'none: holds no scene. Allowed: .png, .jpg, .jpeg, .tif, .tiff, .webp.',
    ],
    [
      'labels of another size',
      (text) => text.replace('labels: labels.json', 'labels: other.json'),
      'scenes/a.png: has not the size that its labels are for, found 80 x 60. Allowed: 81 x 60.',
    ],
    [
      'labels of a picture that is not there',
      (text) => text.replace('labels: labels.json', 'labels: gone.json'),
      'scenes/z.png: there is no such file.',
    ],
  ])('%s', async (name, change, fault) => {
    mkdirSync(site.path('one'), { recursive: true });
    mkdirSync(site.path('none'), { recursive: true });
    copyFileSync(site.path('scenes/a.png'), site.path('one/a.png'));
    const images = [{ id: 1, file_name: 'a.png', width: 81, height: 60 }];
    site.write('other.json', JSON.stringify({ images, annotations: [], categories: [] }));
    site.write(
      'gone.json',
      JSON.stringify({ images: [{ ...images[0], file_name: 'z.png' }], annotations: [], categories: [] }),
    );
    const faults = await refused(name.replaceAll(' ', '-'), change);
    expect(faults[0]).toContain(fault);
    expect(existsSync(site.path(`not-${name.replaceAll(' ', '-')}`))).toBe(false);
  });

  test('options out of range', async () => {
    expect(await faultsOf(make('never', { limit: 0, shard: { index: 4, of: 3 } }))).toEqual([
      'limit: is out of range, found 0. Allowed: a whole number from 1 up.',
      'shard: is out of range, found 4/3. Allowed: i/n with whole numbers, i from 1 to n.',
    ]);
    expect(await faultsOf(make('never', { threads: 0 }))).toEqual([
      'threads: is out of range, found 0. Allowed: a whole number from 1 to 64.',
    ]);
  });

  test('pictures that no label names are left out, with a warning', async () => {
    site.write(
      'few.json',
      JSON.stringify({
        images: [{ id: 1, file_name: 'a.png', width: 80, height: 60 }],
        annotations: [],
        categories: [],
      }),
    );
    const path = recipe(
      'few',
      RECIPE.replace('labels: labels.json', 'labels: few.json').replace('count: 8', 'count: 1'),
    );
    const { warnings } = await dataset({ recipe: path, out: site.path('few'), threads: 1 });
    expect(warnings.map((warning) => warning.replace(`${site.path('')}/`, ''))).toEqual([
      'scenes: 2 pictures are not in the labels and left out',
    ]);
  });
});
