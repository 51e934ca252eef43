import { describe, expect, it } from 'vitest';
import { decideTax, percentText, rateOn, taxOf } from './decide-tax.ts';
import { standardRates } from './standard-rates.ts';

const at = '2026-12-01T10:00:00.000Z';
const seller = { country: 'GB', vatNumber: 'GB999999973' };
const decide = (country: string, vatNumber: string | null = null, taxPoint = at) =>
  decideTax({ seller, buyer: { country, vatNumber }, taxPoint, rates: standardRates });

describe('decideTax', () => {
  it('takes the seller’s own standard rate at home, with or without a VAT number', () => {
    expect(decide('GB')).toMatchObject({ category: 'S', rateHundredths: 2_000, country: 'GB', note: null });
    expect(decide('GB', 'GB980780684')).toMatchObject({ category: 'S', rateHundredths: 2_000 });
  });
  // Source: Directive 2006/112/EC arts. 44, 196 and 226(11a), from memory.
  it('reverses the charge for a business elsewhere and says so in the words of art. 226', () => {
    const decision = decide('DE', 'DE136695976');
    expect(decision).toMatchObject({ category: 'AE', rateHundredths: 0 });
    expect(decision.note).toMatch(/^Reverse charge/);
  });
  it('takes the buyer’s rate where the buyer has no VAT number', () => {
    expect(decide('FI')).toMatchObject({ category: 'S', rateHundredths: 2_550, country: 'FI' });
  });
  it('takes none outside the table', () => expect(decide('US')).toMatchObject({ category: 'O', rateHundredths: 0 }));
  it('chooses the rate by tax point', () => {
    expect(rateOn(standardRates, 'EE', '2025-06-30T23:59:59.999Z')).toBe(2_200);
    expect(rateOn(standardRates, 'EE', '2025-07-01T00:00:00.000Z')).toBe(2_400);
    expect(rateOn(standardRates, 'EE', '2023-12-31')).toBe(null);
  });
});

describe('taxOf', () => {
  // Worked by hand: 0.20 × 22.00 = 4.40; 0.255 × 95.00 = 24.225 → 24.23; 0.19 × 0.05 = 0.0095 → 0.01; 0.20 × 0.02 = 0.004 → 0.
  it.each([
    [2_200, 2_000, 440],
    [9_500, 2_550, 2_423],
    [5, 1_900, 1],
    [2, 2_000, 0],
    [0, 2_000, 0],
    [9_007_199_254_740_991, 2_000, 1_801_439_850_948_198],
  ])('of %i at %i hundredths of a percent is %i', (net, rate, tax) => expect(taxOf(net, rate)).toBe(tax));
  it('writes rates without needless zeros', () => {
    expect([2_000, 2_550, 5, 0].map(percentText)).toEqual(['20', '25.5', '0.05', '0']);
  });
});
