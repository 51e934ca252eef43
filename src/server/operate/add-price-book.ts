/** Adds a version of the price book that starts in the future. Quotes keep the version that they were given. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PriceBookRow } from '@db/models/ledger.ts';
import type { StoredPriceBook } from '@/contracts/operate.ts';
import type { Currency, PriceBook } from '@/domain/pricing/price-book.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { readPriceBooks } from '../billing/read-price-books.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { presentStoredBook } from './list-price-books.ts';
import { recordAct } from './record-act.ts';
import { requireOperator } from './require-operator.ts';

export async function addPriceBook(options: {
  actor: Actor;
  startsAt: string;
  microcreditsPerMillionEvents: PriceBook['microcreditsPerMillionEvents'];
  packs: { credits: number; netMinor: Record<Currency, number> }[];
}): Promise<Result<{ priceBook: StoredPriceBook }>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  // One way of writing a moment, so that moments compare as text.
  const startsAt = new Date(options.startsAt).toISOString();
  return inWriteTransaction(async () => {
    const createdAt = nowText();
    const books = await readPriceBooks();
    const last = books.at(-1)!;
    const fault = (message: string) =>
      refuse('invalid_input', message, { errors: [{ path: 'startsAt', code: 'too_early', message }] });
    if (startsAt <= createdAt)
      return fault('A price book starts in the future: nobody is charged a price of yesterday.');
    if (startsAt <= last.startsAt)
      return fault(`Version ${last.version} starts at ${last.startsAt}; the next one starts after it.`);
    const book: PriceBook = {
      id: newId('pricebook'),
      version: last.version + 1,
      startsAt,
      microcreditsPerMillionEvents: options.microcreditsPerMillionEvents,
      packs: [...options.packs]
        .sort((one, other) => one.credits - other.credits)
        .map((pack) => ({ id: String(pack.credits), ...pack })),
    };
    await PriceBookRow.create({ ...book, createdAt });
    const { id: subjectId, version } = book;
    await recordAct({ ...operator.value, act: 'add_price_book', subjectId, details: { version, startsAt } });
    return accept({ priceBook: presentStoredBook(book) });
  });
}
