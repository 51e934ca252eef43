import { describe, expect, it } from 'vitest';
import { gridTimes, histogramTimes } from './result-outputs.ts';

describe('histogramTimes', () => {
  it('takes every grid time up to 201 of them', () => {
    expect(histogramTimes(200)).toEqual(Array.from({ length: 201 }, (_, i) => i));
  });

  it('takes 201 distinct ones with both ends of a longer grid', () => {
    for (const intervals of [201, 1_000, 9_999]) {
      const times = histogramTimes(intervals);
      expect(new Set(times).size).toBe(201);
      expect([times[0], times.at(-1)]).toEqual([0, intervals]);
    }
  });
});

describe('gridTimes', () => {
  it('starts at 0 and ends at the horizon', () => {
    expect(gridTimes(10, 4)).toEqual([0, 2.5, 5, 7.5, 10]);
  });
});
