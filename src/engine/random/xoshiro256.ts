/**
 * xoshiro256++: the generator of every replicate, here in its readable form; the kernels carry the same steps in WebAssembly.
 * Source: Blackman & Vigna, "Scrambled linear pseudorandom number generators" (ACM Trans. Math. Softw. 2021). Period 2^256 − 1.
 */

const word = (1n << 64n) - 1n;
const rotateLeft = (x: bigint, by: bigint): bigint => ((x << by) | (x >> (64n - by))) & word;

/** Four 64-bit words, not all zero. */
export type Xoshiro256State = [bigint, bigint, bigint, bigint];

const jumpPolynomial = [0x180ec6d33cfd0aban, 0xd5a61266f0c9392cn, 0xa9582618e03fc9aan, 0x39abdc4529b1661cn];

export class Xoshiro256 {
  /** The state; changed by every draw. */
  readonly state: Xoshiro256State;

  constructor(state: readonly bigint[]) {
    if (state.length !== 4 || state.every((s) => s === 0n))
      throw new RangeError('xoshiro256++ needs four words, not all zero');
    this.state = [state[0]!, state[1]!, state[2]!, state[3]!];
  }

  /** The next 64-bit output. */
  next(): bigint {
    const s = this.state;
    const output = (rotateLeft((s[0] + s[3]) & word, 23n) + s[0]) & word;
    const shifted = (s[1] << 17n) & word;
    s[2] ^= s[0];
    s[3] ^= s[1];
    s[1] ^= s[2];
    s[0] ^= s[3];
    s[2] ^= shifted;
    s[3] = rotateLeft(s[3], 45n);
    return output;
  }

  /** Advances by 2^128 outputs. */
  jump(): void {
    const sum: Xoshiro256State = [0n, 0n, 0n, 0n];
    for (const coefficient of jumpPolynomial) {
      for (let bit = 0n; bit < 64n; bit++) {
        if ((coefficient >> bit) & 1n) for (let i = 0; i < 4; i++) sum[i] = sum[i]! ^ this.state[i]!;
        this.next();
      }
    }
    for (let i = 0; i < 4; i++) this.state[i] = sum[i]!;
  }
}

/** A uniform of 53 bits in [0, 1): (x >> 11) · 2⁻⁵³. */
export const uniform53 = (output: bigint): number => Number(output >> 11n) * 2 ** -53;

/** A uniform of 52 bits in [0, 1): (x >> 12) · 2⁻⁵². Chooses reactions; its complement 1 − u, never 0, feeds the logarithm. */
export const uniform52 = (output: bigint): number => Number(output >> 12n) * 2 ** -52;
