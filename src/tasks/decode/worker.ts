/** A worker thread that tries to read symbols. */
import { parentPort } from 'node:worker_threads';
import type { TryAnswer, TryRequest } from './messages.js';
import { ReadingDesk } from './reading-desk.js';

const port = parentPort;
if (port === null) throw new Error('this module runs in a worker thread only');
const desk = new ReadingDesk();

port.on('message', async (request: TryRequest | 'end') => {
  if (request === 'end') {
    port.close(); // nothing is left to wait for, so the thread ends
    return;
  }
  let answer: TryAnswer;
  try {
    answer = { outcomes: await desk.tryAll(request) };
  } catch (error) {
    answer = { failure: error instanceof Error ? (error.stack ?? error.message) : String(error) };
  }
  port.postMessage(answer);
});
