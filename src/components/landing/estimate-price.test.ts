import { describe, expect, it } from 'vitest';
import { estimatePrice, packFor } from './estimate-price.ts';

const packs = [25, 100].map((credits) => ({
  id: String(credits),
  credits,
  netMinor: { EUR: credits * 100, GBP: credits * 85, USD: credits * 110 },
}));

describe('estimatePrice', () => {
  it('charges one credit for a million events at a million microcredits per million', () => {
    expect(estimatePrice({ replicates: 1_000, eventsPerReplicate: 1_000, rate: 1_000_000 })).toBe(1_000_000);
  });
  it('stays exact where doubles would not', () => {
    expect(estimatePrice({ replicates: 1_000_000, eventsPerReplicate: 9_007_199, rate: 1_000_001 })).toBe(
      9_007_208_007_199,
    );
  });
});

describe('packFor', () => {
  it('takes the smallest pack that covers the price', () => {
    expect(packFor(packs, 25_000_000)).toMatchObject({ pack: { credits: 25 }, packs: 1 });
    expect(packFor(packs, 25_000_001)).toMatchObject({ pack: { credits: 100 }, packs: 1 });
  });
  it('takes several of the largest when one is not enough', () => {
    expect(packFor(packs, 250_000_000)).toMatchObject({ pack: { credits: 100 }, packs: 3 });
  });
});
