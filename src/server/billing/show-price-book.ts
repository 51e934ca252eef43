/** The price book as anybody may read it. */
import type { z } from 'zod';
import type { priceBookAnswer } from '@/contracts/billing.ts';
import { currencies } from '@/domain/pricing/price-book.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { presentPriceBook } from './present-price-book.ts';

export async function showPriceBook(): Promise<Result<z.output<typeof priceBookAnswer>>> {
  const book = await presentPriceBook();
  return accept({
    priceBook: {
      ...book,
      packs: book.packs.map(({ id, credits, netMinor }) => ({
        id,
        credits,
        prices: currencies.map((currency) => ({ amountMinor: netMinor[currency], currency })),
      })),
    },
  });
}
