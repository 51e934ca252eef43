/** Worked by hand. */
import { describe, expect, it } from 'vitest';
import { coveredBy, owedAfter } from './decide-dispute.ts';

describe('a dispute', () => {
  it('over a whole payment covers its whole lot, and one over more than it too', () => {
    expect(coveredBy({ creditsMicrocredits: 100_000_000, disputedMinor: 11_400, paidMinor: 11_400 })).toBe(100_000_000);
    expect(coveredBy({ creditsMicrocredits: 100_000_000, disputedMinor: 11_401, paidMinor: 11_400 })).toBe(100_000_000);
  });
  it('over a part covers that part, rounded up: 3800/11400 of 100 credits is a third', () => {
    expect(coveredBy({ creditsMicrocredits: 100_000_000, disputedMinor: 3_800, paidMinor: 11_400 })).toBe(33_333_334);
  });
  it('leaves owed what no credit note gave back', () => {
    const facts = { disputedMinor: 11_400, creditedMinor: 4_000, coveredMicrocredits: 100, takenMicrocredits: 35 };
    expect(owedAfter(facts)).toBe(7_400);
    expect(owedAfter({ ...facts, creditedMinor: 11_401 })).toBe(0);
    // All was taken: 3,799 of 3,800 is rounding, not a debt.
    expect(owedAfter({ ...facts, disputedMinor: 3_800, creditedMinor: 3_799, takenMicrocredits: 100 })).toBe(0);
  });
});
