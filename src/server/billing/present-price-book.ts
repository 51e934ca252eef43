/** The price book in force at a moment. */
import { priceBookAt, type PriceBook } from '@/domain/pricing/price-book.ts';
import { nowText } from '../clock.ts';
import { readPriceBooks } from './read-price-books.ts';

/** `at` is RFC 3339, by default now. The first version starts before anything can be sold, so one is always in force. */
export async function presentPriceBook(at: string = nowText()): Promise<PriceBook> {
  const book = priceBookAt(await readPriceBooks(), at);
  if (!book) throw new Error(`No price book is in force at ${at}.`);
  return book;
}
