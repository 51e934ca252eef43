import { describe, expect, it } from 'vitest';
import { checkVatNumber } from './check-vat-number.ts';

/** Numbers of the kind that official examples and public imprints show, from memory; each has right check digits. */
const right: [string, string][] = [
  ['DE', 'DE 136 695 976'],
  ['GB', 'GB 980 7806 84'],
  ['GB', 'GB999999973'],
  ['FR', 'FR 40 303 265 045'],
  ['BE', 'BE 0428.759.497'],
  ['IT', 'IT 00743110157'],
  ['DK', 'DK 13585628'],
  ['EE', 'EE 100931558'],
  ['GR', 'EL 094259216'],
  ['FI', 'FI 20774740'],
  ['HR', 'HR 33392005961'],
  ['HU', 'HU 12892312'],
  ['LU', 'LU 15027442'],
  ['MT', 'MT 11679112'],
  ['PL', 'PL 8567346215'],
  ['PT', 'PT 501964843'],
  ['SE', 'SE 556188840401'],
  ['SI', 'SI 50223054'],
  ['SK', 'SK 2022749619'],
];

describe('checkVatNumber', () => {
  it.each(right)('accepts %s %s and stores it without spaces', (country, number) => {
    expect(checkVatNumber(number, country)).toEqual({ ok: true, vatNumber: number.replaceAll(/[ .]/g, '') });
  });

  // A single wrong digit must be caught by any of these rules (a property that weighted sums are made for).
  it.each(right)('refuses %s %s with one digit changed', (country, number) => {
    const clean = number.replaceAll(/[ .]/g, '');
    const place = clean.length - 3;
    const changed = `${clean.slice(0, place)}${(Number(clean[place]) + 1) % 10}${clean.slice(place + 1)}`;
    expect(checkVatNumber(changed, country).ok).toBe(false);
  });

  it.each([
    ['DE', 'GB980780684', /begins with DE/],
    ['DE', 'DE12345678', /how a VAT number/],
    ['NL', 'NL123456789', /how a VAT number/],
    ['US', 'x'.repeat(21), /up to 20/],
    ['US', '=1+1', /up to 20/],
  ])('refuses %s %s', (country, number, reason) => {
    expect(checkVatNumber(number, country)).toEqual({ ok: false, reason: expect.stringMatching(reason) as string });
  });
});
