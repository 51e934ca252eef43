/** Issues an invoice: the next number of its series and year, in the transaction of the payment that it is for. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Invoice } from '@db/models/billing.ts';
import type { InvoiceFace } from '@/domain/billing/invoice-face.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { queueWebhook } from '../webhooks/queue-webhook.ts';
import { nextInvoiceNumber } from './next-invoice-number.ts';

export const invoiceSeries = 'BUR';

export interface IssueInvoice {
  teamId: string;
  face: InvoiceFace;
  paidAt: string;
  topUpId?: string;
  proFormaId?: string;
}

/** Joins the caller's write transaction. A purchase has one invoice: asking again answers the first. */
export async function issueInvoice(options: IssueInvoice): Promise<Invoice> {
  const { teamId, face, paidAt, topUpId = null, proFormaId = null } = options;
  if ((topUpId === null) === (proFormaId === null)) throw new Error('An invoice is for one purchase.');
  return inWriteTransaction(async () => {
    const earlier = await Invoice.findOne({ where: topUpId ? { topUpId } : { proFormaId } });
    if (earlier) return earlier;
    const issuedAt = nowText();
    const invoice = await Invoice.create({
      id: newId('invoice'),
      kind: 'invoice',
      ...(await nextInvoiceNumber(invoiceSeries, issuedAt)),
      teamId,
      issuedAt,
      taxPoint: paidAt,
      paidAt,
      topUpId,
      proFormaId,
      correctsInvoiceId: null,
      ...face,
    });
    const { id, number, currency, totalMinor } = invoice;
    await queueWebhook({
      teamId,
      kind: 'invoice_issued',
      occasion: `invoice:${id}`,
      data: { invoice: { id, number, issuedAt, total: { amountMinor: totalMinor, currency } } },
    });
    return invoice;
  });
}
