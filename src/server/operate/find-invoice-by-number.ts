/** Which invoice has a number, for an operator who was told it. */
import { Invoice } from '@db/models/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { requireOperator } from './require-operator.ts';

export async function findInvoiceByNumber(options: {
  actor: Actor;
  number: string;
}): Promise<Result<{ invoiceId: string }>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const number = options.number.trim().toUpperCase();
  const invoice = await Invoice.findOne({ where: { number }, attributes: ['id'] });
  return invoice ? accept({ invoiceId: invoice.id }) : refuse('not_found', `There is no invoice ${number}.`);
}
