import { expect, test } from 'vitest';
import { Warnings } from '../../src/dataset/warnings.js';

test('each warning once, and no more than ten', () => {
  const warnings = new Warnings(['of the recipe']);
  warnings.add(['a', 'b']);
  warnings.add(['b', 'a']);
  expect(warnings.list()).toEqual(['of the recipe', 'a', 'b']);
  for (let i = 0; i < 100; i++) warnings.add([`${i} % of the light`]);
  expect(warnings.list()).toHaveLength(11);
  expect(warnings.list().at(-1)).toBe('There are more warnings: see those of each picture in records.jsonl.');
});
