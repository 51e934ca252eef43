/** Stored invoices as the API shows them. */
import { InvoiceReview, type Invoice } from '@db/models/billing.ts';
import { User } from '@db/models/people.ts';
import type { InvoiceDocument, InvoiceSummary } from '@/contracts/billing.ts';
import { percentText } from '@/domain/billing/decide-tax.ts';
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';

const moneyOf = (row: Invoice) => (amountMinor: number) => ({ amountMinor, currency: row.currency });

/** Reviews of the invoices, oldest first; the last one of each is its state. */
const readReviews = (invoices: Invoice[]): Promise<InvoiceReview[]> =>
  InvoiceReview.findAll({ where: { invoiceId: invoices.map(({ id }) => id) }, order: [['id', 'ASC']] });

export async function describeInvoices(rows: Invoice[]): Promise<InvoiceSummary[]> {
  const reviews = await readReviews(rows);
  return rows.map((row) =>
    summaryOf(
      row,
      reviews.filter(({ invoiceId }) => invoiceId === row.id),
    ),
  );
}

export async function describeInvoice(row: Invoice): Promise<InvoiceDocument> {
  const reviews = await readReviews([row]);
  const people = await User.findAll({
    where: { id: reviews.flatMap(({ userId }) => (userId ? [userId] : [])) },
    attributes: ['id', 'name'],
  });
  const money = moneyOf(row);
  return {
    ...summaryOf(row, reviews),
    seller: row.seller,
    buyer: row.buyer,
    lines: row.lines.map(({ netMinor, ...line }) => ({ ...line, net: money(netMinor) })),
    taxes: row.taxes.map(({ category, rateHundredths, baseMinor, taxMinor, note }) => ({
      category,
      ratePercent: percentText(rateHundredths),
      base: money(baseMinor),
      tax: money(taxMinor),
      note,
    })),
    taxPoint: row.taxPoint,
    purchaseOrder: row.purchaseOrder,
    notes: row.notes,
    review: reviews.map(({ at, userId, state, comment }) => ({
      at,
      person: people.find(({ id }) => id === userId)?.name ?? 'Burette',
      state,
      comment,
    })),
  };
}

function summaryOf(row: Invoice, reviews: InvoiceReview[]): InvoiceSummary {
  const money = moneyOf(row);
  return {
    id: row.id,
    number: row.number,
    kind: row.kind,
    issuedAt: row.issuedAt,
    buyerName: row.buyer.name,
    description: row.lines.map(({ description }) => description).join('; '),
    credits: row.creditsMicrocredits / microcreditsPerCredit,
    net: money(row.netMinor),
    tax: money(row.taxMinor),
    total: money(row.totalMinor),
    paidAt: row.paidAt,
    reviewState: reviews.at(-1)?.state ?? 'to_review',
    topUpId: row.topUpId,
    proFormaId: row.proFormaId,
  };
}
