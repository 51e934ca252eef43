/** Puts the receipts of invoices into the outbox, each once, with the PDF. */
import { literal, Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { BillingDetailsRow, Invoice, InvoiceReceipt, ProForma, TopUp } from '@db/models/billing.ts';
import { Membership, Team, User } from '@db/models/people.ts';
import { dayText, moneyText } from '@/domain/billing/money-text.ts';
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';
import { paths } from '@/paths.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { composeLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { printInvoice } from './print-invoice.ts';

const perRound = 20;

/**
 * The PDF is made outside the transaction that issued the invoice, so that none waits for it; a crash in between
 * leaves an invoice without a receipt row, and the next round writes it. Answers how many were queued.
 */
export async function sendReceipts(): Promise<number> {
  const invoices = await Invoice.findAll({
    where: { id: { [Op.notIn]: literal('(SELECT invoiceId FROM invoiceReceipts)') } },
    order: [['id', 'ASC']],
    limit: perRound,
  });
  for (const invoice of invoices) await sendReceipt(invoice);
  return invoices.length;
}

async function sendReceipt(invoice: Invoice): Promise<void> {
  const content = await printInvoice(invoice);
  const recipients = await recipientsOf(invoice);
  const team = await Team.findByPk(invoice.teamId);
  if (!team) throw new Error(`Invoice ${invoice.number} belongs to no team.`);
  const credits = (invoice.creditsMicrocredits / microcreditsPerCredit).toLocaleString('en');
  const letter = composeLetter({
    subject: `Receipt ${invoice.number}: ${credits} credits`,
    paragraphs: [
      `${moneyText(invoice.totalMinor, invoice.currency)} for ${credits} credits of ${team.name} arrived on ${dayText(invoice.paidAt)}. The credits can be used now.`,
      `Invoice ${invoice.number} is attached.`,
    ],
    action: { label: 'See the invoice', url: `${env().PUBLIC_URL}${paths.invoice(team.slug, invoice.id)}` },
    closing: ['Tax treatment shown on the invoice is configuration, not advice.'],
  });
  const attachments = [{ filename: `${invoice.number}.pdf`, contentType: 'application/pdf', content }];
  await inWriteTransaction(async () => {
    if (await InvoiceReceipt.findByPk(invoice.id)) return;
    for (const to of recipients)
      await queueMail({ ...letter, to, attachments, messageKey: `receipt:${invoice.id}:${to}` });
    await InvoiceReceipt.create({ invoiceId: invoice.id, queuedAt: nowText() });
  });
}

/** The address in the billing details, or the owners; and whoever paid, while still a member. */
async function recipientsOf({ teamId, topUpId, proFormaId }: Invoice): Promise<string[]> {
  const purchase = topUpId ? await TopUp.findByPk(topUpId) : proFormaId ? await ProForma.findByPk(proFormaId) : null;
  const details = await BillingDetailsRow.findByPk(teamId);
  const members = await Membership.findAll({ where: { teamId, removedAt: null } });
  const written = members.filter(
    ({ userId, roles }) => userId === purchase?.userId || (!details?.email && roles.includes('owner')),
  );
  const people = await User.findAll({ where: { id: written.map(({ userId }) => userId) }, attributes: ['email'] });
  return [...new Set([...(details?.email ? [details.email] : []), ...people.map(({ email }) => email)])];
}
