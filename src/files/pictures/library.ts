/** The picture library, set up once. Nothing outside this folder imports it. */
import sharp from 'sharp';

// Off, so that a file that was written anew is read anew, and so that no memory is held between pictures.
sharp.cache(false);

export { sharp };

/** Bound the threads with which picture files are read and written; 0 is the default, one a core. */
export function limitPictureThreads(threads: number): void {
  sharp.concurrency(threads);
}
