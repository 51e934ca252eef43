import { describe, expect, it } from 'vitest';
import { columnScale, heightOnScale } from './column-scale.ts';

const credit = 1_000_000;

describe('columnScale', () => {
  it('labels at most seven marks, in steps of 1, 2 or 5 times a power of ten, for any level', () => {
    for (const level of [1, 999, 0.3 * credit, 7 * credit, 312 * credit, 354 * credit, 99_999 * credit, 2 ** 52]) {
      const scale = columnScale(level);
      const leading = Number(scale.majorMicrocredits.toPrecision(1).replace(/e.*/, '').replace(/0+$/, ''));
      expect([1, 2, 5]).toContain(leading);
      expect(scale.topMicrocredits / scale.majorMicrocredits).toBeLessThanOrEqual(7);
      expect(scale.topMicrocredits % scale.majorMicrocredits).toBe(0);
      expect(scale.topMicrocredits).toBeGreaterThan(level);
    }
  });

  it('shows ten credits of empty glass when there is nothing', () => {
    expect(columnScale(0)).toEqual({ topMicrocredits: 10 * credit, majorMicrocredits: 2 * credit, minorsPerMajor: 10 });
  });
});

describe('heightOnScale', () => {
  it('keeps a level below zero at the bottom and one above the top at the top', () => {
    const scale = columnScale(100 * credit);
    expect(heightOnScale(-5, scale)).toBe(0);
    expect(heightOnScale(10 ** 12, scale)).toBe(1);
  });
});
