/** Adds a message to the thread of an invoice and tells the other side by mail, in one transaction. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import type { Invoice } from '@db/models/billing.ts';
import { InvoiceMessage } from '@db/models/finance.ts';
import { Membership, Team, User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { mayDo } from '@/domain/teams/permissions.ts';
import { paths } from '@/paths.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { newId } from '../ids.ts';
import { composeLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';

/** Joins the caller's write transaction. The team's side writes to every operator, the operator's to the team's finance people. */
export async function addInvoiceMessage(options: {
  invoice: Invoice;
  side: 'team' | 'operator';
  userId: string | null;
  body: string;
}): Promise<Result<null>> {
  const { invoice, side, userId, body } = options;
  return inWriteTransaction(async () => {
    if ((await InvoiceMessage.count({ where: { invoiceId: invoice.id } })) >= limits.messagesPerInvoice)
      return refuse(
        'limit_reached',
        `A thread holds ${limits.messagesPerInvoice} messages. Nothing was stored; go on by e-mail.`,
      );
    const message = await InvoiceMessage.create({
      id: newId('message'),
      invoiceId: invoice.id,
      side,
      userId,
      body,
      at: nowText(),
    });
    const team = (await Team.findByPk(invoice.teamId))!;
    const page = side === 'team' ? paths.operateInvoice(invoice.id) : paths.invoice(team.slug, invoice.id);
    const letter = composeLetter({
      subject:
        side === 'team' ? `Question about invoice ${invoice.number}` : `Answer about your invoice ${invoice.number}`,
      paragraphs: [`${side === 'team' ? team.name : 'Burette'} writes about invoice ${invoice.number}:`, body],
      action: { label: 'Read and answer', url: env().PUBLIC_URL + page },
    });
    const readers = side === 'team' ? await operators() : await financePeople(invoice.teamId);
    for (const { email } of readers)
      await queueMail({ ...letter, to: email, messageKey: `invoice-message:${message.id}:${email}` });
    return accept(null);
  });
}

const operators = (): Promise<User[]> => User.findAll({ where: { operator: true }, attributes: ['email'] });

/** Everybody in the team who may see to its money. */
export async function financePeople(teamId: string): Promise<User[]> {
  const members = await Membership.findAll({ where: { teamId, removedAt: null } });
  const may = members.filter(({ roles }) => mayDo(roles, 'billing:write'));
  return User.findAll({ where: { id: may.map(({ userId }) => userId) }, attributes: ['id', 'email', 'name'] });
}
