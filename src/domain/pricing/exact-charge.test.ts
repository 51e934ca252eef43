import { describe, expect, it } from 'vitest';
import { exactChargeText } from './exact-charge.ts';

/** Products worked by hand; microcredits per million events are 10^-12 credits an event. */
describe('exactChargeText', () => {
  it.each([
    [0, 1_000_000, '0'],
    [1, 1, '0.000000000001'],
    [18_200_001, 1_000_000, '18.200001'],
    [7, 1_600_001, '0.000011200007'],
    [2_000_000, 1_500_000, '3'],
  ])('of %i events at %i is %s', (events, rate, text) => {
    expect(exactChargeText(events, rate)).toBe(text);
  });
});
