/** The configured exchange rate into the currency of the seller's books. */
import { ExchangeRateRow } from '@db/models/billing.ts';
import { env } from '../env.ts';

/** Undefined when the currencies are the same or no rate is configured. */
export async function readBooksRate(
  currency: string,
  at: string,
): Promise<{ currency: string; rateMillionths: number } | undefined> {
  const books = env().SELLER_CURRENCY;
  if (books === currency) return undefined;
  const rows = await ExchangeRateRow.findAll({
    where: { fromCurrency: currency, toCurrency: books },
    order: [['validFrom', 'DESC']],
  });
  const row = rows.find(({ validFrom }) => validFrom <= at.slice(0, 10));
  return row && { currency: books, rateMillionths: row.rateMillionths };
}
