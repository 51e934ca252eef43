/** The price books as they are stored. */
import { PriceBookRow } from '@db/models/ledger.ts';
import type { PriceBook } from '@/domain/pricing/price-book.ts';

/** Every version, oldest first. */
export async function readPriceBooks(): Promise<PriceBook[]> {
  const rows = await PriceBookRow.findAll({ order: [['version', 'ASC']] });
  return rows.map(({ id, version, startsAt, microcreditsPerMillionEvents, packs }) => ({
    id,
    version,
    startsAt,
    microcreditsPerMillionEvents,
    packs,
  }));
}
