import { expect, it } from 'vitest';
import { countText, numberText, valueWithError } from './number-text.ts';

it('rounds the error to two digits and the value to the same place (GUM 7.2.6, from memory)', () => {
  expect(valueWithError(212.4321, 0.9123)).toEqual({ value: '212.43', error: '0.91' });
  expect(valueWithError(-0.001234, 0.00011)).toEqual({ value: '−0.00123', error: '0.00011' });
  expect(valueWithError(1234567, 4321)).toEqual({ value: '1,234,600', error: '4,300' });
});

it('says when there is no error to speak of', () => {
  expect(valueWithError(5, 0)).toEqual({ value: '5', error: '0' });
  expect(valueWithError(5, NaN)).toEqual({ value: '5', error: '–' });
});

it('groups digits, keeps small numbers readable and never prints NaN', () => {
  expect(numberText(18_214_903, 10)).toBe('18,214,903');
  expect(numberText(0.00001234)).toBe('1.234e-5');
  expect(numberText(0)).toBe('0');
  expect(numberText(NaN)).toBe('–');
  expect(countText(-1200)).toBe('−1,200');
});
