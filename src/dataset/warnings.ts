/** Warnings of many pictures, each once, and not more than people will read. */
export class Warnings {
  readonly #said: Set<string>;
  #isFull = false;

  constructor(first: readonly string[]) {
    this.#said = new Set(first);
  }

  add(warnings: readonly string[]): void {
    for (const warning of warnings) {
      if (this.#said.has(warning)) continue;
      if (this.#said.size < MOST) this.#said.add(warning);
      else this.#isFull = true;
    }
  }

  list(): string[] {
    return [...this.#said, ...(this.#isFull ? [MORE] : [])];
  }
}

const MOST = 10;
const MORE = 'There are more warnings: see those of each picture in records.jsonl.';
