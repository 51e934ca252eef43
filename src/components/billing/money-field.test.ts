/** Worked by hand. */
import { expect, it } from 'vitest';
import { moneyField, parseMoney } from './money-field.ts';

it.each([
  ['350', 35_000],
  ['1,200.5', 120_050],
  [' 0.01 ', 1],
  ['19.99', 1_999],
  ['0', null],
  ['', null],
  ['-5', null],
  ['1.999', null],
  ['1e3', null],
])('%s is %s minor units', (text, minor) => expect(parseMoney(text)).toBe(minor));

it('is written back as it was typed', () => {
  for (const minor of [1, 99, 100, 1_999, 35_000, 120_050]) expect(parseMoney(moneyField(minor))).toBe(minor);
});
