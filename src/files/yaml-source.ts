/** YAML with the line and column of every value. */
import {
  type Document,
  isAlias,
  isMap,
  isScalar,
  isSeq,
  LineCounter,
  type Node,
  type Pair,
  parseDocument,
  type Scalar,
  type YAMLMap,
} from 'yaml';
import { type Fault, InputError } from '../errors.js';
import { readInputText } from './input-text.js';
import { keyPath, type Path, type Place, type Source } from './source.js';

/** Aliases may repeat this many nodes: enough for shared tables, far too few for an alias bomb. */
const MAX_ALIASES = 100;

const PLAIN_TAGS = ['str', 'int', 'float', 'bool', 'null', 'map', 'seq'].map(
  (name) => `tag:yaml.org,2002:${name}`,
);

/** Reads a YAML or JSON file. @throws {InputError} what `readInputText` and `parseSource` throw */
export function readSource(file: string): Source {
  return parseSource(readInputText(file), file);
}

/** Reads YAML 1.2 (of which JSON is a part).
 *
 * @param text  one document, a mapping at its top
 * @param file  the name for faults
 * @throws {InputError} every syntax error at once; no mapping; several documents; tags; an alias bomb
 */
export function parseSource(text: string, file?: string): Source {
  const lines = new LineCounter();
  const document = parseDocument(text, {
    version: '1.2',
    schema: 'core',
    lineCounter: lines,
    prettyErrors: false,
    uniqueKeys: false, // YamlSource knows the path of a key that stands twice, the parser only its offset
    logLevel: 'error',
  });
  return new YamlSource(document, lines, file);
}

class YamlSource implements Source {
  readonly file?: string;
  readonly value: unknown;
  readonly faults: Fault[] = [];
  readonly #document: Document;
  readonly #lines: LineCounter;
  readonly #root: YAMLMap;
  /** Faults after which the data means nothing. */
  readonly #refusals: Fault[] = [];

  constructor(document: Document, lines: LineCounter, file?: string) {
    this.file = file;
    this.#document = document;
    this.#lines = lines;
    this.#root = this.#checkedRoot();
    this.#visit(this.#root, [], []);
    if (this.#refusals.length > 0) throw new InputError([...this.faults, ...this.#refusals]);
    this.value = this.#plainData();
  }

  place(path: Path, part: 'key' | 'value'): Place {
    let node: Node | null = this.#root;
    let key: Scalar | undefined; // key of `node`, where it has one
    let holder: Node = this.#root; // the last thing on the way that is written down
    for (const step of path) {
      const child = childOf(isAlias(node) ? (node.resolve(this.#document) ?? null) : node, step);
      if (child === undefined) {
        part = 'key'; // not there: what should hold it stands for it
        break;
      }
      holder = key ?? node ?? holder;
      ({ value: node, key } = child);
    }
    const isWritten = node !== null && node.range![0] < node.range![1];
    const there = (part === 'key' ? key : undefined) ?? (isWritten ? node : key) ?? holder;
    return { ...this.#at(there!.range![0]), key: keyPath(path) };
  }

  #at(offset: number): Place {
    const { line, col } = this.#lines.linePos(offset);
    return { file: this.file, line, column: col };
  }

  #checkedRoot(): YAMLMap {
    const { errors, contents } = this.#document;
    if (errors.length > 0) throw new InputError(this.#syntaxFaults());
    if (contents === null || (isScalar(contents) && contents.value === null)) {
      throw new InputError({ file: this.file, message: 'is empty' });
    }
    if (isMap(contents)) return contents;
    const allowed = 'lines of the form `key: value`';
    throw new InputError({ ...this.#at(contents.range![0]), message: 'is not a mapping', allowed });
  }

  /** One a line: what follows in the same line mostly follows from the first. */
  #syntaxFaults(): Fault[] {
    const byLine = new Map<number | undefined, Fault>();
    for (const { code, message, pos } of this.#document.errors) {
      const fault = { ...this.#at(pos[0]), ...syntaxFault(code, message) };
      if (!byLine.has(fault.line)) byLine.set(fault.line, fault);
    }
    return [...byLine.values()];
  }

  #visit(node: Node | null, path: Path, ancestors: readonly Node[]): void {
    if (node === null) return;
    const refuse = (fault: Fault) =>
      this.#refusals.push({ ...this.#at(node.range![0]), key: keyPath(path), ...fault });
    if (isAlias(node)) {
      const target = node.resolve(this.#document);
      if (target === undefined) refuse({ message: `nothing above is marked &${node.source}` });
      else if (ancestors.includes(target)) refuse({ message: `*${node.source} stands inside itself` });
      return;
    }
    if (node.tag !== undefined && !PLAIN_TAGS.includes(node.tag)) {
      const advice = 'Delete the word that starts with an exclamation mark.';
      refuse({ message: 'has a tag, which these files do not use', found: node.tag, advice });
    }
    const inside = [...ancestors, node];
    if (isSeq(node)) {
      for (const [index, item] of node.items.entries())
        this.#visit(item as Node | null, [...path, index], inside);
    }
    if (isMap(node)) this.#visitMap(node, path, inside);
  }

  #visitMap(map: YAMLMap, path: Path, ancestors: readonly Node[]): void {
    const firsts = new Map<string, Node>();
    for (const pair of map.items as Pair<Node | null, Node | null>[]) {
      const { key, value } = pair;
      const where = this.#at((key?.range ?? map.range!)[0]);
      if (!isScalar(key) || key.value === null || key.value === '__proto__') {
        const message = 'has a key that is no plain word or number';
        this.#refusals.push({ ...where, key: keyPath(path), message });
        continue;
      }
      const word = String(key.value);
      const first = firsts.get(word);
      if (first === undefined) firsts.set(word, key);
      else {
        const line = this.#at(first.range![0]).line;
        const message = `stands twice, first in line ${line}`;
        this.faults.push({
          ...where,
          key: keyPath([...path, word]),
          message,
          advice: 'Delete one of the two.',
        });
      }
      this.#visit(value, [...path, word], ancestors);
    }
  }

  #plainData(): unknown {
    try {
      return this.#document.toJS({ maxAliasCount: MAX_ALIASES });
    } catch (error) {
      if (!(error instanceof ReferenceError)) throw error;
      throw new InputError({
        file: this.file,
        message: 'repeats too much by aliases (*name)',
        allowed: `up to ${MAX_ALIASES} repeated values`,
        advice: 'Write the values out.',
      });
    }
  }
}

function childOf(node: Node | null, step: PropertyKey): { key?: Scalar; value: Node | null } | undefined {
  if (isSeq(node) && typeof step === 'number' && step < node.items.length) {
    return { value: node.items[step] as Node | null };
  }
  if (!isMap(node)) return undefined;
  // the last of two equal keys is the one that counts
  const pair = node.items.findLast(({ key }) => isScalar(key) && String(key.value) === String(step));
  return pair === undefined ? undefined : { key: pair.key as Scalar, value: pair.value as Node | null };
}

function syntaxFault(code: string, words: string): Fault {
  switch (code) {
    case 'MULTIPLE_DOCS':
      return {
        message: 'a second document starts here',
        allowed: 'one document a file',
        advice: 'Delete the line `---`.',
      };
    case 'TAB_AS_INDENT':
      return { message: 'a tab indents this line', allowed: 'spaces', advice: 'Replace the tab by spaces.' };
    case 'RESOURCE_EXHAUSTION':
      return { message: 'is nested too deeply' };
    default:
      return { message: `is not valid YAML: ${words.charAt(0).toLowerCase()}${words.slice(1)}` };
  }
}
