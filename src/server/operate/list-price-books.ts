/** Every version of the price book, newest first. */
import type { StoredPriceBook } from '@/contracts/operate.ts';
import { currencies, type PriceBook } from '@/domain/pricing/price-book.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { readPriceBooks } from '../billing/read-price-books.ts';
import { requireOperator } from './require-operator.ts';

export async function listPriceBooks(options: { actor: Actor }): Promise<Result<{ priceBooks: StoredPriceBook[] }>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  return accept({ priceBooks: (await readPriceBooks()).reverse().map(presentStoredBook) });
}

export const presentStoredBook = (book: PriceBook): StoredPriceBook => ({
  ...book,
  packs: book.packs.map(({ id, credits, netMinor }) => ({
    id,
    credits,
    prices: currencies.map((currency) => ({ amountMinor: netMinor[currency], currency })),
  })),
});
