/** Checksums of files and texts. */
import { createHash } from 'node:crypto';
import fs from 'node:fs';

export function sha256(data: Uint8Array | string): string {
  return createHash('sha256').update(data).digest('hex');
}

/** Size and checksum of a file, read piece by piece. */
export async function fileChecksum(path: string): Promise<{ bytes: number; sha256: string }> {
  const hash = createHash('sha256');
  let bytes = 0;
  for await (const piece of fs.createReadStream(path, { highWaterMark: 1 << 18 })) {
    hash.update(piece as Buffer);
    bytes += (piece as Buffer).length;
  }
  return { bytes, sha256: hash.digest('hex') };
}

/** Do something with every item, a few at a time. */
export async function forEachFew<Item>(
  items: readonly Item[],
  few: number,
  act: (item: Item, index: number) => Promise<void>,
): Promise<void> {
  let next = 0;
  const takeAll = async () => {
    while (next < items.length) {
      const index = next++;
      await act(items[index], index);
    }
  };
  await Promise.all(Array.from({ length: Math.min(few, items.length) }, takeAll));
}
