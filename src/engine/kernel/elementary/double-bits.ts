/** The bits of a double in plain TypeScript: sign, exponent and the first 20 bits of the fraction are the high word. */

const real = new Float64Array(1);
const words = new Uint32Array(real.buffer);
const wide = new BigUint64Array(real.buffer);
const [low, high] = new Uint8Array(Uint32Array.of(1).buffer)[0] === 1 ? [0, 1] : [1, 0];

export function highWord(x: number): number {
  real[0] = x;
  return words[high]!;
}

/** `x` with its high word replaced. */
export function withHighWord(x: number, word: number): number {
  real[0] = x;
  words[high] = word;
  return real[0]!;
}

/** `x` with the lower half of its fraction cleared: the upper part of a splitting into two shorter factors. */
export function truncatedFraction(x: number): number {
  real[0] = x;
  words[low] = words[low]! & 0xf8000000;
  return real[0]!;
}

/** 2^exponent for a normal result: −1022 ≤ exponent ≤ 1023. */
export function powerOfTwo(exponent: number): number {
  words[low] = 0;
  words[high] = (exponent + 1023) << 20;
  return real[0]!;
}

export function bitsOf(x: number): bigint {
  real[0] = x;
  return wide[0]!;
}
