/** Invoices as rows for a spreadsheet, newest first. */
import type { InvoiceFilters } from '@/contracts/invoices.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { scaledFigure, spreadsheetCsv } from '@/formats/spreadsheet/spreadsheet-csv.ts';
import { listInvoices } from './list-invoices.ts';

const columns = [
  'number',
  'kind',
  'issued',
  'paid',
  'buyer',
  'for',
  'credits',
  'currency',
  'before tax',
  'tax',
  'total',
  'review',
];
/** Of every currency that we sell in. */
const decimals = 2;

/** A credit note's amounts are negative, so that a column can be summed. */
export async function exportInvoices(
  options: { actor: Actor; team: string } & InvoiceFilters,
): Promise<Result<{ filename: string; pieces: AsyncIterable<string> }>> {
  const first = await listInvoices({ ...options, limit: limits.listPage });
  if (!first.ok) return first;
  async function* pieces(): AsyncIterable<string> {
    yield spreadsheetCsv([columns]);
    let page = first;
    for (;;) {
      if (!page.ok) throw new Error(`The invoices ended early: ${page.detail}`);
      yield spreadsheetCsv(
        page.value.invoices.map((invoice) => {
          const sign = invoice.kind === 'credit_note' ? -1 : 1;
          return [
            invoice.number,
            invoice.kind === 'credit_note' ? 'credit note' : 'invoice',
            invoice.issuedAt.slice(0, 10),
            invoice.paidAt.slice(0, 10),
            invoice.buyerName,
            invoice.description,
            sign * invoice.credits,
            invoice.total.currency,
            ...[invoice.net, invoice.tax, invoice.total].map(({ amountMinor }) =>
              scaledFigure(sign * amountMinor, decimals),
            ),
            invoice.reviewState.replace('_', ' '),
          ];
        }),
      );
      const cursor = page.value.nextCursor;
      if (!cursor) return;
      page = await listInvoices({ ...options, limit: limits.listPage, cursor });
    }
  }
  return accept({ filename: `invoices-${options.team}.csv`, pieces: pieces() });
}
