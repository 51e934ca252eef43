/** The thread of an invoice as both sides see it, oldest first. */
import { InvoiceMessage } from '@db/models/finance.ts';
import { User } from '@db/models/people.ts';
import type { InvoiceMessageDocument } from '@/contracts/invoices.ts';

export async function presentInvoiceMessages(invoiceId: string): Promise<InvoiceMessageDocument[]> {
  const rows = await InvoiceMessage.findAll({ where: { invoiceId }, order: [['id', 'ASC']] });
  const people = await User.findAll({
    where: { id: rows.flatMap(({ userId }) => userId ?? []) },
    attributes: ['id', 'name'],
  });
  return rows.map(({ id, at, side, userId, body }) => ({
    id,
    at,
    side,
    // Which of our people answers is for us to know.
    person: side === 'operator' ? 'Burette' : (people.find((person) => person.id === userId)?.name ?? 'The team'),
    body,
  }));
}
