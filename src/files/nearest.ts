/** The known word that a wrong one was most likely meant to be. */

/** The nearest of the known words, or undefined where none is near.
 *
 * Near means: the same letters in another spelling (`fNumber` for `f_number`), a part of a known word (`pitch_um` for
 * `pixel_pitch_um`), or few slips of the finger: at most a third of the longer word's letters.
 */
export function nearest(word: string, known: readonly string[]): string | undefined {
  const plain = letters(word);
  const same = known.find((candidate) => letters(candidate) === plain);
  if (same !== undefined) return same;
  const ranked = known
    .map((candidate) => ({ candidate, slips: editDistance(plain, letters(candidate)) }))
    .sort((a, b) => a.slips - b.slips);
  const best = ranked[0];
  if (best !== undefined && best.slips <= Math.max(word.length, best.candidate.length) / 3)
    return best.candidate;
  const holds = (candidate: string) => candidate.includes(word) || word.includes(candidate);
  return word.length < 3 ? undefined : known.find((candidate) => candidate.length >= 3 && holds(candidate));
}

/** Words in the order of their likeness to a wrong one, the best `count` that are near at all. */
export function nearestFew(word: string, known: readonly string[], count: number): string[] {
  const rest = [...known];
  const found: string[] = [];
  while (found.length < count) {
    const next = nearest(word, rest);
    if (next === undefined) break;
    found.push(next);
    rest.splice(rest.indexOf(next), 1);
  }
  return found;
}

/** Number of letters to insert, delete, replace or swap with their neighbour to make one word the other.
 *
 * Optimal string alignment: no part is edited twice. Source: F. J. Damerau, Commun. ACM 7 (1964) 171 (cited from memory).
 */
export function editDistance(a: string, b: string): number {
  let twoBack = new Array<number>(b.length + 1).fill(0);
  let oneBack = Array.from({ length: b.length + 1 }, (_, column) => column);
  for (let row = 1; row <= a.length; row++) {
    const line = [row];
    for (let column = 1; column <= b.length; column++) {
      const differ = a[row - 1] === b[column - 1] ? 0 : 1;
      let slips = Math.min(oneBack[column] + 1, line[column - 1] + 1, oneBack[column - 1] + differ);
      const swapped = row > 1 && column > 1 && a[row - 1] === b[column - 2] && a[row - 2] === b[column - 1];
      if (swapped) slips = Math.min(slips, twoBack[column - 2] + 1);
      line.push(slips);
    }
    twoBack = oneBack;
    oneBack = line;
  }
  return oneBack[b.length];
}

function letters(word: string): string {
  return word.toLowerCase().replaceAll(/[^a-z0-9.]/g, '');
}
