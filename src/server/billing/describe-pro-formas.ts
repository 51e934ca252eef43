/** Stored pro-formas as the API shows them. */
import { Invoice, type ProForma } from '@db/models/billing.ts';
import type { ProFormaDocument } from '@/contracts/billing.ts';
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';
import { nowText } from '../clock.ts';

export async function describeProFormas(rows: ProForma[]): Promise<ProFormaDocument[]> {
  const invoices = await Invoice.findAll({
    where: { proFormaId: rows.map(({ id }) => id) },
    attributes: ['id', 'proFormaId'],
  });
  return rows.map((row) => {
    const money = (amountMinor: number) => ({ amountMinor, currency: row.currency });
    return {
      id: row.id,
      number: row.number,
      state: row.state,
      createdAt: row.issuedAt,
      dueAt: row.dueAt,
      overdue: row.state === 'open' && row.dueAt < nowText(),
      termsDays: row.termsDays,
      purchaseOrder: row.purchaseOrder ?? '',
      credits: row.creditsMicrocredits / microcreditsPerCredit,
      net: money(row.netMinor),
      tax: money(row.taxMinor),
      total: money(row.totalMinor),
      invoiceId: invoices.find(({ proFormaId }) => proFormaId === row.id)?.id ?? null,
    };
  });
}
