import { describe, expect, it } from 'vitest';
import { checkVatNumber } from './check-vat-number.ts';
import { vatCheckDigits } from './vat-check-digits.ts';

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
  ['AT', 'AT U13585627'],
  ['BG', 'BG 175074752'],
  ['BG', 'BG 7523169263'],
  ['CY', 'CY 10259033P'],
  ['CZ', 'CZ 25123891'],
  ['CZ', 'CZ 7103192745'],
  ['CZ', 'CZ 640903926'],
  ['ES', 'ES B58378431'],
  ['ES', 'ES J99216582'],
  ['ES', 'ES X2482300W'],
  ['ES', 'ES 54362315K'],
  ['FR', 'FR K7399859412'],
  ['IE', 'IE 6433435F'],
  ['IE', 'IE 6433435OA'],
  ['IE', 'IE 8D79739I'],
  ['LT', 'LT 119511515'],
  ['LT', 'LT 100001919017'],
  ['LV', 'LV 40003521600'],
  ['LV', 'LV 16117519997'],
  ['NL', 'NL 004495445B01'],
  ['NL', 'NL 000099998B57'],
  ['RO', 'RO 18547290'],
];

/** Worked by hand: the weighted sum, its remainder and the digit it asks for stand beside each. */
const byHand: [string, string, boolean][] = [
  // 1·2·1·2·1·2·1 on 1234567, doubled digits cast out: 1+4+3+8+5+3+7 = 31, +4 = 35, 10 − 5 = 5.
  ['AT', 'ATU12345675', true],
  ['AT', 'ATU12345674', false],
  // 8·7·6·5·4·3·2 on 1000001: 8+2 = 10, 11 − 10 = 1.
  ['SI', 'SI10000011', true],
  // on 1000007: 8+14 = 22, remainder 0, which would need 11: not issued.
  ['SI', 'SI10000071', false],
  // 7·5·3·2·1·7·5·3·2 on 000000012: 3+4 = 7, 70 mod 11 = 4.
  ['RO', 'RO124', true],
  ['RO', 'RO125', false],
  // 8·7·6·5·4·3·2 on 1000000: 8 of the alphabet W = 0, A = 1 …: H.
  ['IE', 'IE1000000H', true],
  ['IE', 'IE1000000I', false],
  // No published check digit: judged by format alone.
  ['GB', 'GBGD001', true],
  ['LV', 'LV32000000001', true],
  ['CZ', 'CZ123456789', true],
];

describe('checkVatNumber', () => {
  it.each(right)('accepts %s %s and stores it without spaces', (country, number) => {
    expect(checkVatNumber(number, country)).toEqual({ ok: true, vatNumber: number.replaceAll(/[ .]/g, '') });
  });

  // A single wrong digit must be caught by any of these rules (a property that weighted sums are made for).
  it.each(right)('refuses %s %s with one digit changed', (country, number) => {
    const clean = number.replaceAll(/[ .]/g, '');
    const place = [...clean].findLastIndex((character, at) => /\d/.test(character) && at < clean.length - 2);
    const changed = `${clean.slice(0, place)}${(Number(clean[place]) + 1) % 10}${clean.slice(place + 1)}`;
    expect(checkVatNumber(changed, country).ok).toBe(false);
  });

  it.each(byHand)('judges %s %s as worked by hand: %s', (country, number, fits) => {
    expect(checkVatNumber(number, country).ok).toBe(fits);
  });

  it('checks digits of every country whose format it knows', () => {
    const union = 'AT BE BG CY CZ DE DK EE EL ES FI FR HR HU IE IT LT LU LV MT NL PL PT RO SE SI SK';
    expect(Object.keys(vatCheckDigits).sort()).toEqual(`${union} GB`.split(' ').sort());
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
