/** One source out of several: the parts of a rig that stand in files of their own, options of the command line. */
import { dirname, isAbsolute, join } from 'node:path';
import { type Fault, InputError } from '../errors.js';
import { type Path, type Place, type Source, valueAt } from './source.js';
import { readSource } from './yaml-source.js';

/** A source into which others are set. */
export class SourceTree implements Source {
  readonly #root: Source;
  readonly #grafts: { at: Path; source: Source }[] = [];
  readonly #lost: Path[] = [];
  readonly #faults: Fault[];
  #value: unknown;

  constructor(root: Source) {
    this.#root = root;
    this.#value = root.value;
    this.#faults = [...root.faults];
  }

  get file(): string | undefined {
    return this.#root.file;
  }

  get value(): unknown {
    return this.#value;
  }

  get faults(): readonly Fault[] {
    return this.#faults;
  }

  /** Sets a source at a path; the mapping that holds it must be there. */
  graft(at: Path, source: Source): void {
    this.#grafts.push({ at, source });
    this.#faults.push(...source.faults);
    this.#value = withValue(this.#value, at, source.value);
  }

  /** Sets the file that the text at a path names, where there is a text: relative to the file that names it.
   * A file that cannot be read becomes a fault at the place that names it, and nothing below it is checked.
   * @param folder  where paths of a source without a file start
   * @param check   throws an InputError where the part is none of its kind
   */
  graftFile(at: Path, folder: string, check: (part: Source) => void = () => {}): void {
    const name = valueAt(this.#value, at);
    if (typeof name !== 'string') return;
    try {
      const part = readSource(this.resolve(at, name, folder));
      check(part);
      this.graft(at, part);
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      const here = this.place(at, 'value');
      this.#faults.push(
        ...error.faults.map((fault) => (fault.line === undefined ? namedHere(fault, here) : fault)),
      );
      this.#lost.push(at);
    }
  }

  /** A path that a value names, relative to the file that names it. */
  resolve(at: Path, name: string, folder: string): string {
    if (name === '' || isAbsolute(name)) return name;
    const file = this.#ownerOf(at).source.file;
    return join(file === undefined ? folder : dirname(file), name);
  }

  /** Whether a path leads into a part that could not be read. */
  isLost(path: Path): boolean {
    return this.#lost.some((lost) => startsWith(path, lost));
  }

  place(path: Path, part: 'key' | 'value'): Place {
    const { at, source } = this.#ownerOf(path);
    return source.place(path.slice(at.length), part);
  }

  #ownerOf(path: Path): { at: Path; source: Source } {
    return this.#grafts.findLast(({ at }) => startsWith(path, at)) ?? { at: [], source: this.#root };
  }
}

/** A fault of a part as a whole, told at the place that names the part. */
function namedHere(fault: Fault, here: Place): Fault {
  return {
    ...fault,
    ...here,
    message: fault.file === undefined ? fault.message : `'${fault.file}': ${fault.message}`,
  };
}

function startsWith(path: Path, start: Path): boolean {
  return start.length <= path.length && start.every((step, index) => String(step) === String(path[index]));
}

/** Plain data with another value at a path of mappings; the data itself stays as it is. */
function withValue(data: unknown, [step, ...rest]: Path, value: unknown): unknown {
  const inner = rest.length === 0 ? value : withValue(valueAt(data, [step]), rest, value);
  return { ...(data as object), [step]: inner };
}
