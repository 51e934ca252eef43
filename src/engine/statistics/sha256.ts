/**
 * SHA-256, the same in Node and in a browser and without waiting, which the platforms' own do not offer together.
 * Source: FIPS 180-4, sections 4.1.2, 4.2.2, 5 and 6.2.
 */

const firstPrimes = (count: number): number[] => {
  const primes: number[] = [];
  for (let n = 2; primes.length < count; n++) if (primes.every((prime) => n % prime !== 0)) primes.push(n);
  return primes;
};

/** The first 32 bits of the fractional part of the `root`-th root of a prime, by whole-number search. */
const fraction = (prime: number, root: 2n | 3n): number => {
  const target = BigInt(prime) << (32n * root);
  let low = 0n;
  let high = BigInt(prime) << 32n;
  while (low < high) {
    const middle = (low + high + 1n) >> 1n;
    if (middle ** root <= target) low = middle;
    else high = middle - 1n;
  }
  return Number(BigInt.asUintN(32, low));
};

const start = Int32Array.from(firstPrimes(8), (prime) => fraction(prime, 2n));
const constants = Int32Array.from(firstPrimes(64), (prime) => fraction(prime, 3n));
const words = new Int32Array(64);

/** The digest of the parts one after the other: 32 bytes. */
export function sha256(...parts: Uint8Array[]): Uint8Array {
  const length = parts.reduce((sum, { byteLength }) => sum + byteLength, 0);
  const padded = new Uint8Array(Math.ceil((length + 9) / 64) * 64);
  let at = 0;
  for (const part of parts) {
    padded.set(part, at);
    at += part.byteLength;
  }
  padded[length] = 0x80;
  const view = new DataView(padded.buffer);
  view.setUint32(padded.length - 8, Math.floor(length / 2 ** 29));
  view.setUint32(padded.length - 4, (length * 8) % 2 ** 32);
  const state = start.slice();
  for (let block = 0; block < padded.length; block += 64) compress(state, view, block);
  const digest = new DataView(new ArrayBuffer(32));
  state.forEach((word, i) => digest.setInt32(4 * i, word));
  return new Uint8Array(digest.buffer);
}

function compress(state: Int32Array, view: DataView, block: number): void {
  for (let t = 0; t < 16; t++) words[t] = view.getInt32(block + 4 * t);
  for (let t = 16; t < 64; t++) {
    const x = words[t - 15]!;
    const y = words[t - 2]!;
    const s0 = ((x >>> 7) | (x << 25)) ^ ((x >>> 18) | (x << 14)) ^ (x >>> 3);
    const s1 = ((y >>> 17) | (y << 15)) ^ ((y >>> 19) | (y << 13)) ^ (y >>> 10);
    words[t] = (words[t - 16]! + s0 + words[t - 7]! + s1) | 0;
  }
  let [a, b, c, d, e, f, g, h] = state as unknown as [number, number, number, number, number, number, number, number];
  for (let t = 0; t < 64; t++) {
    const s1 = ((e >>> 6) | (e << 26)) ^ ((e >>> 11) | (e << 21)) ^ ((e >>> 25) | (e << 7));
    const first = (h + s1 + ((e & f) ^ (~e & g)) + constants[t]! + words[t]!) | 0;
    const s0 = ((a >>> 2) | (a << 30)) ^ ((a >>> 13) | (a << 19)) ^ ((a >>> 22) | (a << 10));
    const second = (s0 + ((a & b) ^ (a & c) ^ (b & c))) | 0;
    h = g;
    g = f;
    f = e;
    e = (d + first) | 0;
    d = c;
    c = b;
    b = a;
    a = (first + second) | 0;
  }
  state[0]! += a;
  state[1]! += b;
  state[2]! += c;
  state[3]! += d;
  state[4]! += e;
  state[5]! += f;
  state[6]! += g;
  state[7]! += h;
}
