import { describe, expect, it } from 'vitest';
import { readUnitWords } from './unit-words.ts';

/** Each unit as kind^exponent, with multiplier·10^scale where that is not 1. */
const shortForm = (text: string): string | null => {
  const units = readUnitWords(text);
  if (units === null) return null;
  return units
    .map(
      ({ kind, exponent, scale, multiplier }) =>
        `${multiplier === 1 && scale === 0 ? '' : `${multiplier}e${scale} `}${kind}^${exponent}`,
    )
    .join(', ');
};

describe('readUnitWords', () => {
  // SI prefixes and non-SI units accepted with the SI: BIPM, SI Brochure, 9th edition (from memory).
  it.each([
    ['s', 'second^1'],
    ['min', '60e0 second^1'],
    ['h', '3600e0 second^1'],
    ['ms', '1e-3 second^1'],
    ['1/s', 'second^-1'],
    ['s^-1', 'second^-1'],
    ['s−1', 'second^-1'],
    ['µL', '1e-6 litre^1'],
    ['fL', '1e-15 litre^1'],
    ['nM', '1e-9 mole^1, litre^-1'],
    ['1/(nM·s)', '1e-9 mole^-1, litre^1, second^-1'],
    ['M^-1 s^-1', 'mole^-1, litre^1, second^-1'],
    ['L/(mol*s)', 'litre^1, mole^-1, second^-1'],
    ['µm^3', '1e-6 metre^3'],
    ['molecules', 'item^1'],
    ['1/molecule/s', 'item^-1, second^-1'],
    ['1', 'dimensionless^1'],
  ])('reads “%s” as %s', (text, expected) => {
    expect(shortForm(text)).toBe(expected);
  });

  it.each(['', 'furlong', '1/(s', 's)', '1/', '2 s', 's^', 'a b c', '½'])('does not understand “%s”', (text) => {
    expect(shortForm(text)).toBeNull();
  });
});
