// @ts-check
/** Seeded random numbers for the drawings: the same seed draws the same picture on every machine. */

/** A stream of random numbers that depends on the seed alone.
 *
 * @param {number} seed  whole number
 * Method: a 32-bit counter stepped by an odd constant (a Weyl sequence), mixed by xor-shifts and multiplications.
 */
export function randomStream(seed) {
  let counter = seed >>> 0;
  const next = () => {
    counter = (counter + 0x9e3779b9) >>> 0;
    let mixed = counter;
    mixed = Math.imul(mixed ^ (mixed >>> 16), 0x85ebca6b);
    mixed = Math.imul(mixed ^ (mixed >>> 13), 0xc2b2ae35);
    return ((mixed ^ (mixed >>> 16)) >>> 0) / 2 ** 32;
  };
  return {
    /** Uniform in [low, high).
     * @param {number} low
     * @param {number} high */
    between: (low, high) => low + (high - low) * next(),
    /** Whole number in [low, high].
     * @param {number} low
     * @param {number} high */
    whole: (low, high) => low + Math.floor((high - low + 1) * next()),
    /** One entry of a list.
     * @template T
     * @param {readonly T[]} list
     * @returns {T} */
    pick: (list) => list[Math.floor(list.length * next())],
  };
}
