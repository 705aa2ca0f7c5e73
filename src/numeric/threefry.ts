/** The random function under every random number of the project. */

/** Rotate the 32 bits of x left by n. */
function rotl(x: number, n: number): number {
  return (x << n) | (x >>> (32 - n));
}

/** Threefry-4x32 with 20 rounds: 128 bits of counter to 128 random bits, keyed by 128 bits. Any counter, in
 * any order.
 *
 * Source: J. K. Salmon, M. A. Moraes, R. O. Dror and D. E. Shaw, "Parallel Random Numbers: As Easy as 1, 2,
 * 3", SC11 (2011), section 4.2; rotation constants and the parity constant of the key schedule from the same
 * (all from memory; the published known answers are in the tests). It needs nothing but add, rotate and
 * exclusive-or, which JavaScript does in one machine instruction each; the sibling with multiplications,
 * Philox, takes about twice as long here.
 *
 * The rounds are written out: a loop over the eight rotation pairs also takes twice as long.
 *
 * @param k0 - k3  key, 32-bit integers, signed or not
 * @param c0 - c3  counter, 32-bit integers, signed or not
 * @param out      four words, written as signed 32-bit integers
 */
// biome-ignore format: one round a line
export function threefry4x32(
  k0: number, k1: number, k2: number, k3: number,
  c0: number, c1: number, c2: number, c3: number,
  out: Int32Array,
): void {
  const k4 = 0x1bd11bda ^ k0 ^ k1 ^ k2 ^ k3;
  let a = (c0 + k0) | 0;
  let b = (c1 + k1) | 0;
  let c = (c2 + k2) | 0;
  let d = (c3 + k3) | 0;

  // rounds 1-4
  a = (a + b) | 0; b = rotl(b, 10) ^ a; c = (c + d) | 0; d = rotl(d, 26) ^ c;
  a = (a + d) | 0; d = rotl(d, 11) ^ a; c = (c + b) | 0; b = rotl(b, 21) ^ c;
  a = (a + b) | 0; b = rotl(b, 13) ^ a; c = (c + d) | 0; d = rotl(d, 27) ^ c;
  a = (a + d) | 0; d = rotl(d, 23) ^ a; c = (c + b) | 0; b = rotl(b, 5) ^ c;
  a = (a + k1) | 0; b = (b + k2) | 0; c = (c + k3) | 0; d = (d + k4 + 1) | 0;
  // rounds 5-8
  a = (a + b) | 0; b = rotl(b, 6) ^ a; c = (c + d) | 0; d = rotl(d, 20) ^ c;
  a = (a + d) | 0; d = rotl(d, 17) ^ a; c = (c + b) | 0; b = rotl(b, 11) ^ c;
  a = (a + b) | 0; b = rotl(b, 25) ^ a; c = (c + d) | 0; d = rotl(d, 10) ^ c;
  a = (a + d) | 0; d = rotl(d, 18) ^ a; c = (c + b) | 0; b = rotl(b, 20) ^ c;
  a = (a + k2) | 0; b = (b + k3) | 0; c = (c + k4) | 0; d = (d + k0 + 2) | 0;
  // rounds 9-12
  a = (a + b) | 0; b = rotl(b, 10) ^ a; c = (c + d) | 0; d = rotl(d, 26) ^ c;
  a = (a + d) | 0; d = rotl(d, 11) ^ a; c = (c + b) | 0; b = rotl(b, 21) ^ c;
  a = (a + b) | 0; b = rotl(b, 13) ^ a; c = (c + d) | 0; d = rotl(d, 27) ^ c;
  a = (a + d) | 0; d = rotl(d, 23) ^ a; c = (c + b) | 0; b = rotl(b, 5) ^ c;
  a = (a + k3) | 0; b = (b + k4) | 0; c = (c + k0) | 0; d = (d + k1 + 3) | 0;
  // rounds 13-16
  a = (a + b) | 0; b = rotl(b, 6) ^ a; c = (c + d) | 0; d = rotl(d, 20) ^ c;
  a = (a + d) | 0; d = rotl(d, 17) ^ a; c = (c + b) | 0; b = rotl(b, 11) ^ c;
  a = (a + b) | 0; b = rotl(b, 25) ^ a; c = (c + d) | 0; d = rotl(d, 10) ^ c;
  a = (a + d) | 0; d = rotl(d, 18) ^ a; c = (c + b) | 0; b = rotl(b, 20) ^ c;
  a = (a + k4) | 0; b = (b + k0) | 0; c = (c + k1) | 0; d = (d + k2 + 4) | 0;
  // rounds 17-20
  a = (a + b) | 0; b = rotl(b, 10) ^ a; c = (c + d) | 0; d = rotl(d, 26) ^ c;
  a = (a + d) | 0; d = rotl(d, 11) ^ a; c = (c + b) | 0; b = rotl(b, 21) ^ c;
  a = (a + b) | 0; b = rotl(b, 13) ^ a; c = (c + d) | 0; d = rotl(d, 27) ^ c;
  a = (a + d) | 0; d = rotl(d, 23) ^ a; c = (c + b) | 0; b = rotl(b, 5) ^ c;

  out[0] = (a + k0) | 0;
  out[1] = (b + k1) | 0;
  out[2] = (c + k2) | 0;
  out[3] = (d + k3 + 5) | 0;
}
