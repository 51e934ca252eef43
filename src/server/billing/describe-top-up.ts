/** A stored top-up as the API shows it. */
import { Invoice, type TopUp } from '@db/models/billing.ts';
import type { TopUpDocument } from '@/contracts/billing.ts';
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';

export async function describeTopUps(rows: TopUp[]): Promise<TopUpDocument[]> {
  const invoices = await Invoice.findAll({
    where: { topUpId: rows.map(({ id }) => id) },
    attributes: ['id', 'topUpId'],
  });
  return rows.map((row) => {
    const money = (amountMinor: number) => ({ amountMinor, currency: row.currency });
    return {
      id: row.id,
      state: row.state,
      credits: row.creditsMicrocredits / microcreditsPerCredit,
      net: money(row.netMinor),
      tax: money(row.taxMinor),
      total: money(row.totalMinor),
      createdAt: row.createdAt,
      paidAt: row.paidAt,
      checkoutUrl: row.state === 'pending' ? row.checkoutUrl : null,
      problem: row.problem,
      way: row.way,
      invoiceId: invoices.find(({ topUpId }) => topUpId === row.id)?.id ?? null,
    };
  });
}
