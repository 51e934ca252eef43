/** What of a purchase is neither spent, held nor disputed. */
import type { Invoice } from '@db/models/billing.ts';
import { Dispute } from '@db/models/cards.ts';
import { readBalance } from '../ledger/read-balance.ts';
import { readOpenLots, type OpenLotRow } from '../ledger/read-open-lots.ts';

/** `disputed`: the bank has the money or may get it, so that it cannot be given back by us. */
export async function findRefundable(
  invoice: Invoice,
): Promise<{ lot: OpenLotRow | null; freeMicrocredits: number; disputed: boolean }> {
  const purchaseId = invoice.kind === 'invoice' ? (invoice.topUpId ?? invoice.proFormaId) : null;
  const lot = (await readOpenLots(invoice.teamId)).find((each) => each.purchaseId === purchaseId) ?? null;
  const disputed = (await Dispute.count({ where: { invoiceId: invoice.id, state: ['open', 'lost'] } })) > 0;
  if (!lot || !purchaseId) return { lot: null, freeMicrocredits: 0, disputed };
  const { available } = await readBalance(invoice.teamId);
  const free = Math.min(available, lot.remainingMicrocredits - lot.frozenMicrocredits);
  return { lot, freeMicrocredits: disputed ? 0 : free, disputed };
}
