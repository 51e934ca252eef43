import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { earnedByMonth, sumMoney } from './earned-by-month.ts';

const lot = { lotId: 'a', netMinor: 100, currency: 'GBP', creditsMicrocredits: 3 };

describe('earnedByMonth', () => {
  it('rounds down on the running total: a third of £1.00 a month is 33, 33, 34', () => {
    const months = ['2026-10', '2026-11', '2026-12'];
    const rows = months.map((month) => ({ ...lot, month, drawnMicrocredits: 1 }));
    expect(earnedByMonth(rows).map(({ amountMinor }) => amountMinor)).toEqual([33, 33, 34]);
  });

  it('adds up to the net money once a lot is spent, however the draws fall, and never mixes currencies', () => {
    const arbitraryLot = fc.record({
      netMinor: fc.integer({ min: 1, max: 10_000_000 }),
      draws: fc.array(fc.integer({ min: 1, max: 1_000_000_000 }), { minLength: 1, maxLength: 12 }),
      currency: fc.constantFrom('EUR', 'GBP', 'USD'),
    });
    fc.assert(
      fc.property(fc.array(arbitraryLot, { maxLength: 8 }), (lots) => {
        const rows = lots.flatMap(({ netMinor, draws, currency }, index) =>
          draws.map((drawnMicrocredits, month) => ({
            lotId: `lot${index}`,
            month: `2026-${String(month + 1).padStart(2, '0')}`,
            drawnMicrocredits,
            netMinor,
            currency,
            creditsMicrocredits: draws.reduce((sum, draw) => sum + draw, 0),
          })),
        );
        const paid = sumMoney(lots.map(({ netMinor, currency }) => ({ amountMinor: netMinor, currency })));
        expect(sumMoney(earnedByMonth(rows))).toEqual(paid);
      }),
      { seed: 20261201, numRuns: 300 },
    );
  });
});
