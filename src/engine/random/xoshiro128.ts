/**
 * xoshiro128++: 32-bit draws in plain number arithmetic, for resampling results, where the 64-bit generator's big integers would
 * take seconds. No replicate is drawn from it.
 * Source: Blackman & Vigna, "Scrambled linear pseudorandom number generators" (ACM Trans. Math. Softw. 2021). Period 2^128 − 1.
 */
const rotateLeft = (x: number, by: number): number => (x << by) | (x >>> (32 - by));

export class Xoshiro128 {
  /** The state as signed 32-bit words; changed by every draw. */
  private readonly state: Int32Array;

  /** Two 64-bit words, not both zero; the low half of each comes first. */
  constructor(words: readonly [bigint, bigint]) {
    this.state = Int32Array.from(
      words.flatMap((word) => [Number(word & 0xffffffffn) | 0, Number((word >> 32n) & 0xffffffffn) | 0]),
    );
    if (this.state.every((word) => word === 0)) throw new RangeError('xoshiro128++ needs a state that is not all zero');
  }

  /** The next output, 0 to 2³² − 1. */
  next(): number {
    const s = this.state as unknown as [number, number, number, number];
    const output = (rotateLeft((s[0] + s[3]) | 0, 7) + s[0]) >>> 0;
    const shifted = s[1] << 9;
    s[2] ^= s[0];
    s[3] ^= s[1];
    s[1] ^= s[2];
    s[0] ^= s[3];
    s[2] ^= shifted;
    s[3] = rotateLeft(s[3], 11);
    return output;
  }
}
