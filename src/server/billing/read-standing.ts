/** What every page of a team must say about its payments: what is owed, and what is in dispute. */
import { Invoice } from '@db/models/billing.ts';
import { Dispute, Receivable } from '@db/models/cards.ts';
import type { Money } from '@/contracts/purchase.ts';

export interface Standing {
  owed: { invoiceId: string; invoiceNumber: string; total: Money }[];
  disputed: { invoiceId: string; invoiceNumber: string; total: Money; frozenMicrocredits: number }[];
}

/** For a team that the caller has authorised. */
export async function readStanding(teamId: string): Promise<Standing> {
  const receivables = await Receivable.findAll({ where: { teamId, state: 'open' }, order: [['id', 'ASC']] });
  const disputes = await Dispute.findAll({ where: { teamId, state: 'open' }, order: [['openedAt', 'ASC']] });
  if (receivables.length + disputes.length === 0) return { owed: [], disputed: [] };
  const ids = [...receivables, ...disputes].map(({ invoiceId }) => invoiceId);
  const invoices = await Invoice.findAll({ where: { id: ids }, attributes: ['id', 'number'] });
  const about = ({ invoiceId, totalMinor, currency }: Receivable | Dispute) => ({
    invoiceId,
    invoiceNumber: invoices.find(({ id }) => id === invoiceId)?.number ?? '',
    total: { amountMinor: totalMinor, currency },
  });
  return {
    owed: receivables.map(about),
    disputed: disputes.map((one) => ({ ...about(one), frozenMicrocredits: one.frozenMicrocredits })),
  };
}
