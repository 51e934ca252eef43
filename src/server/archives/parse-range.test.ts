import { describe, expect, it } from 'vitest';
import { parseRange } from './parse-range.ts';

// Source: RFC 9110, section 14.1.2, whose examples are for a representation of 10,000 bytes.
describe('parseRange', () => {
  it.each([
    ['bytes=0-499', { start: 0, end: 499 }],
    ['bytes=500-999', { start: 500, end: 999 }],
    ['bytes=-500', { start: 9_500, end: 9_999 }],
    ['bytes=9500-', { start: 9_500, end: 9_999 }],
    ['bytes=0-0', { start: 0, end: 0 }],
    ['bytes=9000-99999', { start: 9_000, end: 9_999 }],
    ['bytes=-99999', { start: 0, end: 9_999 }],
  ])('reads %s', (header, range) => {
    expect(parseRange(header, 10_000)).toEqual(range);
  });

  it.each(['bytes=10000-', 'bytes=-0'])('calls %s unsatisfiable', (header) => {
    expect(parseRange(header, 10_000)).toBe('unsatisfiable');
  });

  it.each([
    null,
    '',
    'bytes=-',
    'bytes=5-2',
    'items=0-1',
    'bytes=0-1,5-6',
    'bytes=a-b',
    'bytes=1-99999999999999999999',
  ])('ignores %s, as the standard allows', (header) => {
    expect(parseRange(header, 10_000)).toBeNull();
  });
});
