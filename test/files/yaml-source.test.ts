import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { stringify } from 'yaml';
import { parseSource } from '../../src/files/yaml-source.js';
import { faultsOf } from './packhouse.js';

const fault = (text: string) => faultsOf(() => parseSource(text, 'a.yaml'));

describe('values', () => {
  test('YAML 1.2: yes and 1:30 are texts, 0777 is 777, 1e3 is a number', () => {
    expect(parseSource('a: yes\nb: 1:30\nc: 0777\nd: 1e3\ne: ~\nf: true').value).toEqual({
      a: 'yes',
      b: '1:30',
      c: 777,
      d: 1000,
      e: null,
      f: true,
    });
  });

  test('JSON, indented by tabs', () => {
    expect(parseSource('{\n\t"a": [1,\n\t\t2.5e-3],\n\t"b": {"c": "d"}\n}').value).toEqual({
      a: [1, 2.5e-3],
      b: { c: 'd' },
    });
  });

  test('anchors and aliases', () => {
    expect(parseSource('a: &t [1, 2]\nb: *t').value).toEqual({ a: [1, 2], b: [1, 2] });
  });

  test('any data comes back, as YAML and as JSON', () => {
    const data = fc.dictionary(
      fc.stringMatching(/^[a-z][a-z_0-9]{0,8}$/),
      fc.letrec((tie) => ({
        value: fc.oneof(
          { depthSize: 'small' },
          fc.double({ noDefaultInfinity: true, noNaN: true }).map((x) => x + 0), // YAML has no -0
          fc.string(),
          fc.boolean(),
          fc.constant(null),
          fc.array(tie('value'), { maxLength: 4 }),
          fc.dictionary(fc.stringMatching(/^[a-z]{1,8}$/), tie('value'), { maxKeys: 4 }),
        ),
      })).value,
      { minKeys: 1, maxKeys: 5 },
    );
    fc.assert(
      fc.property(data, (expected) => {
        expect(parseSource(stringify(expected)).value).toEqual(expected);
        expect(parseSource(JSON.stringify(expected, null, 2)).value).toEqual(expected);
      }),
    );
  });
});

describe('places', () => {
  const source = parseSource('a:\n  b: [1, { c: 2 }]\n  d:\ne: &x { f: 3 }\ng: *x\n', 'a.yaml');
  test.each([
    [['a', 'b', 1, 'c'], 'value', 2, 15, 'a.b[1].c'],
    [['a', 'b', 1, 'c'], 'key', 2, 12, 'a.b[1].c'],
    [['a', 'b', 0], 'value', 2, 7, 'a.b[0]'],
    [['a', 'd'], 'value', 3, 3, 'a.d'], // empty: its key stands for it
    [['a', 'x'], 'value', 1, 1, 'a.x'], // missing: the line of its parent
    [['a', 'x', 'y'], 'value', 1, 1, 'a.x.y'],
    [['a', 'b', 7], 'value', 2, 3, 'a.b[7]'],
    [['x'], 'value', 1, 1, 'x'],
    [['g', 'f'], 'value', 4, 12, 'g.f'], // through the alias
    [[], 'value', 1, 1, ''],
  ] as const)('%j, its %s', (path, part, line, column, key) => {
    expect(source.place(path, part)).toEqual({ file: 'a.yaml', line, column, key });
  });

  test('lines end as the file ends them', () => {
    expect(parseSource('a: 1\r\nb: 2\r\n').place(['b'], 'value')).toMatchObject({ line: 2, column: 4 });
  });
});

describe('refused:', () => {
  test.each([
    ['a list', '- 1\n- 2', 1, 1],
    ['a number', '\n12', 2, 1],
    ['a text', 'hello', 1, 1],
  ])('%s in place of a mapping', (_, text, line, column) => {
    const allowed = 'lines of the form `key: value`';
    expect(fault(text)).toEqual([{ file: 'a.yaml', line, column, message: 'is not a mapping', allowed }]);
  });

  test.each(['# nothing but a comment', '---\n...\n', '~'])('nothing in it: %j', (text) => {
    expect(fault(text)).toEqual([{ file: 'a.yaml', message: 'is empty' }]);
  });

  test('every syntax error at once', () => {
    const faults = fault('a: ]\nb: "x" y "z\n');
    expect(faults.map(({ line }) => line)).toEqual([1, 2]); // one a line
    for (const one of faults) {
      expect(one.message).toMatch(/^is not valid YAML: [a-z]/);
      expect(one).toMatchObject({ file: 'a.yaml', line: expect.any(Number), column: expect.any(Number) });
    }
  });

  test('a tab as indentation', () => {
    expect(fault('a:\n\tb: 1')[0]).toMatchObject({
      line: 2,
      column: 1,
      message: 'a tab indents this line',
      allowed: 'spaces',
    });
  });

  test('a second document', () => {
    expect(fault('a: 1\n---\nb: 2')).toEqual([
      {
        file: 'a.yaml',
        line: 2,
        column: 1,
        message: 'a second document starts here',
        allowed: 'one document a file',
        advice: 'Delete the line `---`.',
      },
    ]);
  });

  test.each([
    ['of its own', 'a: !lens 1', '!lens'],
    ['of a language', 'a: !!js/function "x"', 'tag:yaml.org,2002:js/function'],
    ['for bytes', 'a: !!binary aGk=', 'tag:yaml.org,2002:binary'],
    ['for a set', 'a: !!set { b, c }', 'tag:yaml.org,2002:set'],
  ])('a tag %s', (_, text, found) => {
    expect(fault(text)).toMatchObject([
      { line: 1, key: 'a', message: 'has a tag, which these files do not use', found },
    ]);
  });

  test('the tags of plain values are allowed', () => {
    expect(parseSource('a: !!str 5\nb: !!map { c: !!int 1 }').value).toEqual({ a: '5', b: { c: 1 } });
  });

  test.each([
    ['a list', '? [a]\n: 1'],
    ['a mapping', '{a: 1}: 2'],
    ['nothing', '~: 1'],
    ['the prototype', '__proto__: { x: 1 }'],
  ])('%s as a key', (_, text) => {
    expect(fault(text)).toMatchObject([{ line: 1, message: 'has a key that is no plain word or number' }]);
    expect(({} as Record<string, unknown>).x).toBeUndefined();
  });

  test('an alias of nothing, and one of itself', () => {
    expect(fault('a: *b\nc: &d { e: [*d] }')).toMatchObject([
      { line: 1, column: 4, key: 'a', message: 'nothing above is marked &b' },
      { line: 2, column: 13, key: 'c.e[0]', message: '*d stands inside itself' },
    ]);
  });

  test('an alias bomb, at once', () => {
    // nine levels of nine: 387 million values from 60 lines
    const levels = Array.from({ length: 9 }, (_, i) => {
      const inner = i === 0 ? 'x' : `*l${i - 1}`;
      return `l${i}: &l${i} [${Array(9).fill(inner).join(', ')}]`;
    });
    const start = performance.now();
    expect(fault(levels.join('\n'))).toMatchObject([
      {
        file: 'a.yaml',
        message: 'repeats too much by aliases (*name)',
        allowed: 'up to 100 repeated values',
      },
    ]);
    expect(performance.now() - start).toBeLessThan(1000); // takes milliseconds; unfolded it would take minutes
  });

  test('brackets without an end', () => {
    expect(fault('['.repeat(50000))).toMatchObject([{ line: 1, message: 'is nested too deeply' }]);
  });
});

test('a key that stands twice is a fault, but the data can be read: the last one counts', () => {
  const source = parseSource('a: 1\nb: { 450: 1, "450": 2 }\na: 3\n', 'a.yaml');
  const advice = 'Delete one of the two.';
  expect(source.faults).toEqual([
    { file: 'a.yaml', line: 2, column: 14, key: 'b.450', message: 'stands twice, first in line 2', advice },
    { file: 'a.yaml', line: 3, column: 1, key: 'a', message: 'stands twice, first in line 1', advice },
  ]);
  expect(source.value).toEqual({ a: 3, b: { 450: 2 } });
  expect(source.place(['a'], 'value').line).toBe(3);
});
