/** One-time codes against the vectors of RFC 6238, appendix B (SHA-1), and base32 against RFC 4648, section 10. */
import { describe, expect, it } from 'vitest';
import { codeAt, fromBase32, stepOfCode, stepSeconds, toBase32 } from './one-time-code.ts';

const secret = Buffer.from('12345678901234567890');

describe('one-time codes', () => {
  it.each([
    [59, '94287082'],
    [1111111109, '07081804'],
    [1111111111, '14050471'],
    [1234567890, '89005924'],
    [2000000000, '69279037'],
    [20000000000, '65353130'],
  ])('at %i s are those of the RFC', (seconds, code) => {
    expect(codeAt(secret, Math.floor(seconds / stepSeconds), 8)).toBe(code);
    expect(codeAt(secret, Math.floor(seconds / stepSeconds))).toBe(code.slice(2));
  });

  it('are taken within one step of the clock, and never again or out of order', () => {
    const nowMs = 1111111111_000;
    const present = Math.floor(1111111111 / stepSeconds);
    const accepted = (step: number, after = 0) => stepOfCode({ secret, code: codeAt(secret, step), nowMs, after });
    expect([-2, -1, 0, 1, 2].map((shift) => accepted(present + shift) !== null)).toEqual([
      false,
      true,
      true,
      true,
      false,
    ]);
    expect(accepted(present, present)).toBeNull();
    expect(accepted(present - 1, present)).toBeNull();
  });
});

describe('base32', () => {
  it.each([
    ['', ''],
    ['f', 'MY'],
    ['fo', 'MZXQ'],
    ['foo', 'MZXW6'],
    ['foob', 'MZXW6YQ'],
    ['fooba', 'MZXW6YTB'],
    ['foobar', 'MZXW6YTBOI'],
  ])('of “%s” is %s, without padding', (text, base32) => {
    expect(toBase32(Buffer.from(text))).toBe(base32);
    expect(fromBase32(base32).toString()).toBe(text);
  });
});
