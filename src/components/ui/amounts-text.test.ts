import { describe, expect, it } from 'vitest';
import { bytesText, creditsText, durationText, exactCreditsText, moneyText, roughCountText } from './amounts-text.ts';

describe('creditsText', () => {
  it('gives as many decimals as the size deserves', () => {
    expect([312_400_000, 18_214_903, 1_234_567, 43_210, 7, 0].map((amount) => creditsText(amount))).toEqual([
      '312',
      '18.2',
      '1.23',
      '0.043',
      '0.000007',
      '0',
    ]);
  });
  it('rounds what is available down and what is needed up', () => {
    expect(creditsText(312_999_999, 'down')).toBe('312');
    expect(creditsText(312_000_001, 'up')).toBe('313');
  });
});

describe('exactCreditsText', () => {
  it('shows every digit and at least two decimals', () => {
    expect([1_000_000, -1_234_567, 500_000, 1_234_567_000_000].map((amount) => exactCreditsText(amount))).toEqual([
      '1.00',
      '−1.234567',
      '0.50',
      '1,234,567.00',
    ]);
    expect(exactCreditsText(500_000, 6)).toBe('0.500000');
  });
});

describe('moneyText', () => {
  it('knows how many minor units a currency has (ISO 4217: EUR 2, JPY 0)', () => {
    expect(moneyText(125_000, 'EUR')).toBe('€1,250.00');
    expect(moneyText(125_000, 'JPY')).toBe('¥125,000');
  });
});

describe('words for sizes and times', () => {
  it('says durations coarsely, so that they do not jump', () => {
    expect([0.2, 7.4, 38, 70, 600, 7_800, 200_000].map(durationText)).toEqual([
      'under 1 s',
      'about 7 s',
      'about 40 s',
      'about 70 s',
      'about 10 min',
      'about 2 h 10 min',
      'about 2 days',
    ]);
  });
  it('uses decimal units for bytes and short words for large counts', () => {
    expect(bytesText(1_234_567)).toBe('1.23 MB');
    expect(bytesText(900)).toBe('900 bytes');
    expect(roughCountText(18_214_903)).toBe('18.2 million');
    expect(roughCountText(1_800)).toBe('1,800');
  });
});
