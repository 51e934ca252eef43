import { describe, expect, it } from 'vitest';
import { isLook, isPrecise, looksBetween, type PrecisionTarget } from './precision.ts';

const relative = (part: number): PrecisionTarget => ({
  kind: 'precision',
  observable: 'X',
  gridPoint: 1,
  halfWidth: { relative: part },
});
const seen = { replicates: 1024, mean: 100, standardError: 0.5, commonest: 40 };

describe('looks', () => {
  it('are at 256, 512, 1024 … and nowhere else', () => {
    expect(Array.from({ length: 3000 }, (_, n) => n).filter(isLook)).toEqual([256, 512, 1024, 2048]);
    expect(looksBetween(0, 1024)).toEqual([256, 512, 1024]);
    expect(looksBetween(256, 1500)).toEqual([512, 1024]);
    expect(looksBetween(0, 255)).toEqual([]);
  });
});

describe('isPrecise', () => {
  it('compares 1.96 standard errors with the wished half-width', () => {
    expect(isPrecise(relative(0.0098), seen)).toBe(true);
    expect(isPrecise(relative(0.0097), seen)).toBe(false);
    expect(isPrecise({ ...relative(1), halfWidth: { absolute: 0.98 } }, seen)).toBe(true);
    expect(isPrecise({ ...relative(1), halfWidth: { absolute: 0.97 } }, seen)).toBe(false);
  });

  it('never trusts a spread of 0, nor fewer than 30 replicates off the commonest value', () => {
    expect(isPrecise(relative(1), { ...seen, standardError: 0, commonest: 1024 })).toBe(false);
    expect(isPrecise(relative(1), { ...seen, commonest: 1024 - 29 })).toBe(false);
    expect(isPrecise(relative(1), { ...seen, commonest: 1024 - 30 })).toBe(true);
    expect(isPrecise(relative(1), { ...seen, standardError: NaN })).toBe(false);
  });

  it('never meets a relative target about a mean of 0', () => {
    expect(isPrecise(relative(1), { ...seen, mean: 0 })).toBe(false);
  });
});
