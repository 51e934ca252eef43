/** Worked by hand from the rule of the design: floor of the cumulative share, the last return takes the remainder. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { composeCreditNote, netOfReturn } from './credit-note.ts';

const lot = {
  netMinor: 100,
  creditsMicrocredits: 3,
  remainingMicrocredits: 3,
  returnedMicrocredits: 0,
  creditedNetMinor: 0,
};

describe('money of a return', () => {
  it('is 33, 33 and 34 of 100 for three thirds', () => {
    expect(netOfReturn(lot, 1)).toBe(33);
    expect(netOfReturn({ ...lot, remainingMicrocredits: 2, returnedMicrocredits: 1, creditedNetMinor: 33 }, 1)).toBe(
      33,
    );
    expect(netOfReturn({ ...lot, remainingMicrocredits: 1, returnedMicrocredits: 2, creditedNetMinor: 66 }, 1)).toBe(
      34,
    );
  });

  it('leaves what was spent: a third earned 33, the other two give back 67', () => {
    expect(netOfReturn({ ...lot, remainingMicrocredits: 2 }, 2)).toBe(67);
  });

  it('never returns more than the lot has', () => {
    expect(() => netOfReturn(lot, 4)).toThrow(/cannot return/);
    expect(() => netOfReturn(lot, 0)).toThrow(/cannot return/);
  });

  it('adds up to what was paid, however spending and returns alternate', () => {
    const steps = fc.array(fc.record({ back: fc.boolean(), share: fc.integer({ min: 1, max: 100 }) }), {
      maxLength: 12,
    });
    fc.assert(
      fc.property(fc.nat(10_000_000), fc.integer({ min: 1, max: 2_000_000_000 }), steps, (netMinor, credits, acts) => {
        let remaining = credits;
        let returned = 0;
        let credited = 0;
        const giveBack = (amount: number) => {
          const net = netOfReturn(
            {
              netMinor,
              creditsMicrocredits: credits,
              remainingMicrocredits: remaining,
              returnedMicrocredits: returned,
              creditedNetMinor: credited,
            },
            amount,
          );
          expect(net).toBeGreaterThanOrEqual(0);
          credited += net;
          returned += amount;
          remaining -= amount;
        };
        for (const { back, share } of acts) {
          const amount = Math.floor((remaining * share) / 200);
          if (amount > 0 && back) giveBack(amount);
          else remaining -= amount;
        }
        if (remaining > 0) {
          giveBack(remaining);
          const spent = BigInt(credits - returned);
          expect(credited).toBe(netMinor - Number((BigInt(netMinor) * spent) / BigInt(credits)));
        }
      }),
      { seed: 20261201, numRuns: 500 },
    );
  });
});

describe('a credit note', () => {
  const party = { name: 'A', address: '', country: 'GB', vatNumber: null };
  const invoice = {
    number: 'BUR-2026-00007',
    issuedAt: '2026-12-01T09:00:00.000Z',
    currency: 'EUR',
    netMinor: 103,
    taxMinor: 21,
    totalMinor: 124,
    creditsMicrocredits: 3_000_000,
    seller: party,
    buyer: party,
    lines: [],
    notes: [],
    purchaseOrder: 'PO-1',
    taxes: [
      {
        category: 'S' as const,
        rateHundredths: 2000,
        country: 'GB',
        baseMinor: 103,
        taxMinor: 21,
        note: null,
        inBooks: { currency: 'GBP', taxMinor: 18, rateMillionths: 850_000 },
      },
    ],
  };
  // By hand: 20 % of 52 is 10.4 → 10; of 103 is 20.6 → 21, so the second note has 11; 10 × 0.85 = 8.5 → 9 pence.
  it('names its invoice and takes the tax back to the last minor unit', () => {
    const first = composeCreditNote({
      invoice,
      amountMicrocredits: 1_500_000,
      netMinor: 52,
      credited: { netMinor: 0, taxMinor: 0 },
      reason: 'Asked for.',
    });
    expect(first).toMatchObject({ taxMinor: 10, totalMinor: 62, purchaseOrder: 'PO-1' });
    expect(first.taxes[0]?.inBooks).toMatchObject({ taxMinor: 9 });
    expect(first.notes[0]).toContain('BUR-2026-00007');
    const second = composeCreditNote({
      invoice,
      amountMicrocredits: 1_500_000,
      netMinor: 51,
      credited: { netMinor: 52, taxMinor: 10 },
      reason: 'Asked for.',
    });
    expect(second).toMatchObject({ taxMinor: 11, totalMinor: 62 });
  });
});
