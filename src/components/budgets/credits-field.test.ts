import { describe, expect, it } from 'vitest';
import { creditsField, parseCredits } from './credits-field.ts';

describe('credits in a field', () => {
  it.each([
    ['', null],
    ['1', 1_000_000],
    ['1,200.5', 1_200_500_000],
    ['0.000001', 1],
    ['0.1', 100_000],
  ])('%j is %s microcredits', (text, microcredits) => {
    expect(parseCredits(text)).toEqual({ ok: true, microcredits });
    expect(parseCredits(creditsField(microcredits))).toEqual({ ok: true, microcredits });
  });

  it.each(['0', '-1', 'x', '1.0000001', '1e3', '=1'])('%j is no amount', (text) => {
    expect(parseCredits(text)).toEqual({ ok: false });
  });
});
