/** The thread of an invoice as the operator reads it. */
import { Invoice } from '@db/models/billing.ts';
import type { InvoiceMessageDocument } from '@/contracts/invoices.ts';
import type { AskedInvoice } from '@/contracts/operate.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { presentInvoiceMessages } from '../billing/present-invoice-messages.ts';
import { askedInvoices } from './list-questioned-invoices.ts';
import { requireOperator } from './require-operator.ts';

export interface InvoiceThread {
  invoice: AskedInvoice;
  messages: InvoiceMessageDocument[];
}

export async function readQuestionedInvoice(options: {
  actor: Actor;
  invoiceId: string;
}): Promise<Result<InvoiceThread>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const row = await Invoice.findByPk(options.invoiceId);
  if (!row) return refuse('not_found', 'There is no such invoice.');
  const [invoice] = await askedInvoices([row]);
  return accept({ invoice: invoice!, messages: await presentInvoiceMessages(row.id) });
}
