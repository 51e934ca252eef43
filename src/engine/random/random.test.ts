/**
 * Published vectors of the random streams.
 * Source: Blackman & Vigna, "Scrambled linear pseudorandom number generators", and the SplitMix64 reference (from memory;
 * values recomputed with a second implementation).
 */
import { describe, expect, it } from 'vitest';
import { mix64, splitMix64 } from './splitmix64.ts';
import { replicateState, streamBase } from './stream-key.ts';
import { uniform53, Xoshiro256 } from './xoshiro256.ts';

describe('SplitMix64', () => {
  it('gives the published outputs of seeds 0 and 42', () => {
    expect(splitMix64(0n, 3)).toEqual([16294208416658607535n, 7960286522194355700n, 487617019471545679n]);
    expect(splitMix64(42n, 4)).toEqual([
      13679457532755275413n,
      2949826092126892291n,
      5139283748462763858n,
      6349198060258255764n,
    ]);
  });
});

describe('xoshiro256++', () => {
  it('gives the published outputs of state 1, 2, 3, 4', () => {
    const generator = new Xoshiro256([1n, 2n, 3n, 4n]);
    expect(Array.from({ length: 5 }, () => generator.next())).toEqual([
      41943041n,
      58720359n,
      3588806011781223n,
      3591011842654386n,
      9228616714210784205n,
    ]);
  });

  it('gives the known first, millionth and combined outputs from SplitMix64(42)', () => {
    const generator = new Xoshiro256(splitMix64(42n, 4));
    const first = Array.from({ length: 3 }, () => generator.next());
    expect(first).toEqual([15021278609987233951n, 5881210131331364753n, 18149643915985481100n]);
    let combined = first.reduce((sum, output) => sum ^ output, 0n);
    let last = 0n;
    for (let draw = 4; draw <= 1_000_000; draw++) {
      last = generator.next();
      combined ^= last;
    }
    expect(last).toBe(4094453013007052047n);
    expect(combined).toBe(3864026142526459908n);
  });

  it('jumps ahead by 2^128 outputs', () => {
    const generator = new Xoshiro256(splitMix64(42n, 4));
    generator.jump();
    expect(generator.next()).toBe(13886555598616206053n);
  });

  it('makes the known doubles of 53 bits', () => {
    const generator = new Xoshiro256(splitMix64(42n, 4));
    expect(uniform53(generator.next())).toBe(0.8143051451229099);
    expect(uniform53(generator.next())).toBe(0.3188210400616611);
  });

  it('refuses the all-zero state, in which it would stay', () => {
    expect(() => new Xoshiro256([0n, 0n, 0n, 0n])).toThrow(RangeError);
  });
});

describe('stream keys', () => {
  it('follow mix64(mix64(seed ⊕ purpose) + point · 2^40 + replicate)', () => {
    const base = streamBase('42', 'job', 3);
    expect(base).toBe((mix64(42n) + 3n * 2n ** 40n) % 2n ** 64n);
    expect(replicateState(base, 7)).toEqual(splitMix64(mix64((base + 7n) % 2n ** 64n), 4));
  });

  it('differ between purposes, points and replicates', () => {
    const states = [
      replicateState(streamBase('1', 'job', 0), 0),
      replicateState(streamBase('1', 'pilot', 0), 0),
      replicateState(streamBase('1', 'preview', 0), 0),
      replicateState(streamBase('1', 'job', 1), 0),
      replicateState(streamBase('1', 'job', 0), 1),
      replicateState(streamBase('2', 'job', 0), 0),
    ].map(String);
    expect(new Set(states).size).toBe(states.length);
  });

  it('refuse a seed that is no unsigned 64-bit integer', () => {
    for (const seed of ['', '-1', '1.5', '18446744073709551616', '0x10', 'abc'])
      expect(() => streamBase(seed, 'job', 0)).toThrow(RangeError);
    expect(streamBase('18446744073709551615', 'job', 0)).toBeTypeOf('bigint');
  });
});
