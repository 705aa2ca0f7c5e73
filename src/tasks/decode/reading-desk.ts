/** Where one thread tries symbols: the blur of a place is kept as long as the same place is asked for. */
import type { TryRequest } from './messages.js';
import { BlurDesk } from './patch-blur.js';
import { type Outcome, Reading } from './reading.js';

export class ReadingDesk {
  readonly #blurDesk = new BlurDesk();
  #kept?: { key: number; reading: Reading };

  async tryAll({ setup, setupKey, first, count }: TryRequest): Promise<Outcome[]> {
    if (this.#kept?.key !== setupKey)
      this.#kept = { key: setupKey, reading: new Reading(setup, this.#blurDesk) };
    return this.#kept.reading.tryAll(first, count);
  }
}
