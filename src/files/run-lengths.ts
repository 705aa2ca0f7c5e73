/** The compressed text of run lengths, as COCO files hold it.
 *
 * Counts are written one after the other, from the fourth on as the difference to the one two before. A number
 * goes out in groups of five bits, the lowest first, each in one character from '0' (48) on; the sixth bit says
 * that another group follows, and the fifth bit of the last group is the sign.
 * Source: the COCO data format's mask interface (from memory; the tests hold it against texts that the format's
 * own library wrote).
 */

const FIRST = 48;
const GROUP_BITS = 5;
const MORE = 0x20;
const SIGN = 0x10;

export function encodeRunLengths(counts: readonly number[]): string {
  const characters: string[] = [];
  for (const [index, count] of counts.entries()) {
    let left = index > 2 ? count - counts[index - 2] : count;
    for (;;) {
      const group = left & 0x1f;
      left >>= GROUP_BITS;
      const isLast = (group & SIGN) === 0 ? left === 0 : left === -1;
      characters.push(String.fromCharCode(FIRST + (isLast ? group : group | MORE)));
      if (isLast) break;
    }
  }
  return characters.join('');
}

/** @returns the counts, or undefined for a text that is none */
export function decodeRunLengths(text: string): number[] | undefined {
  const counts: number[] = [];
  let value = 0;
  let shift = 0;
  for (let i = 0; i < text.length; i++) {
    const code = text.charCodeAt(i) - FIRST;
    if (code < 0 || code > 0x3f || shift > 30) return undefined;
    value += (code & 0x1f) * 2 ** shift;
    shift += GROUP_BITS;
    if ((code & MORE) !== 0) continue;
    if ((code & SIGN) !== 0) value -= 2 ** shift;
    if (counts.length > 2) value += counts[counts.length - 2];
    if (value < 0) return undefined;
    counts.push(value);
    value = 0;
    shift = 0;
  }
  return shift === 0 ? counts : undefined;
}
