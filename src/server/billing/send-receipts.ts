/** Puts the receipts of invoices, and credit notes, into the outbox, each once, with the PDF. */
import { literal, Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Invoice, InvoiceReceipt, ProForma, TopUp } from '@db/models/billing.ts';
import { Team } from '@db/models/people.ts';
import { dayText, moneyText } from '@/domain/billing/money-text.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';
import { paths } from '@/paths.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { composeLetter, type ComposedLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { moneyRecipients } from './money-recipients.ts';
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
  const letter = invoice.kind === 'invoice' ? receiptLetter(invoice, team) : creditNoteLetter(invoice, team);
  const attachments = [{ filename: `${invoice.number}.pdf`, contentType: 'application/pdf', content }];
  await inWriteTransaction(async () => {
    if (await InvoiceReceipt.findByPk(invoice.id)) return;
    for (const to of recipients)
      await queueMail({ ...letter, to, attachments, messageKey: `receipt:${invoice.id}:${to}` });
    await InvoiceReceipt.create({ invoiceId: invoice.id, queuedAt: nowText() });
  });
}

const caution = 'Tax treatment shown on the document is configuration, not advice.';
const actionOf = (label: string, invoice: Invoice, team: Team) => ({
  label,
  url: `${env().PUBLIC_URL}${paths.invoice(team.slug, invoice.id)}`,
});

function receiptLetter(invoice: Invoice, team: Team): ComposedLetter {
  const credits = (invoice.creditsMicrocredits / microcreditsPerCredit).toLocaleString('en');
  return composeLetter({
    subject: `Receipt ${invoice.number}: ${credits} credits`,
    paragraphs: [
      `${moneyText(invoice.totalMinor, invoice.currency)} for ${credits} credits of ${team.name} arrived on ${dayText(invoice.paidAt)}. The credits can be used now.`,
      `Invoice ${invoice.number} is attached.`,
    ],
    action: actionOf('See the invoice', invoice, team),
    closing: [caution],
  });
}

function creditNoteLetter(note: Invoice, team: Team): ComposedLetter {
  const credits = creditsText(note.creditsMicrocredits);
  return composeLetter({
    subject: `Credit note ${note.number}: ${credits} taken back`,
    paragraphs: [
      `${credits} of ${team.name} were taken back on ${dayText(note.issuedAt)}, worth ${moneyText(note.totalMinor, note.currency)}.`,
      note.notes[0] ?? '',
      `Credit note ${note.number} is attached.`,
    ],
    action: actionOf('See the credit note', note, team),
    closing: [caution],
  });
}

/** Whoever the document's purchase concerns; a credit note goes where its invoice went. */
async function recipientsOf(document: Invoice): Promise<string[]> {
  const corrected = document.correctsInvoiceId ? await Invoice.findByPk(document.correctsInvoiceId) : null;
  const { topUpId, proFormaId } = corrected ?? document;
  const purchase = topUpId ? await TopUp.findByPk(topUpId) : proFormaId ? await ProForma.findByPk(proFormaId) : null;
  return moneyRecipients({ teamId: document.teamId, buyerUserId: purchase?.userId ?? null });
}
