/** What main thread and decoding workers say to each other. */
import type { Outcome, ReadingSetup } from './reading.js';

export interface TryRequest {
  setup: ReadingSetup;
  /** The same number for the same setup. */
  setupKey: number;
  first: number;
  count: number;
}

export type TryAnswer = { outcomes: Outcome[] } | { failure: string };
