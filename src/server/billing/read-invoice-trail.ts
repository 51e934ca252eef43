/** What happened to an invoice, step by step, and where the credits that it bought went. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { CreditReturn, Invoice, InvoiceReceipt, ProForma, TopUp } from '@db/models/billing.ts';
import { Dispute, Receivable } from '@db/models/cards.ts';
import { Lot } from '@db/models/ledger.ts';
import type { InvoiceTrail } from '@/contracts/invoices.ts';
import { dayText, moneyText } from '@/domain/billing/money-text.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { pageOf } from '../http/page-of.ts';
import { findInvoice } from './find-invoice.ts';

export async function readInvoiceTrail(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
  limit?: number | undefined;
  /** The last job seen. */
  cursor?: string | undefined;
}): Promise<Result<{ trail: InvoiceTrail }>> {
  const { limit = limits.listPageDefault, cursor } = options;
  const found = await findInvoice({ ...options, permission: 'billing:read' });
  if (!found.ok) return found;
  const { invoice } = found.value;
  const purchaseId = invoice.topUpId ?? invoice.proFormaId;
  const lot = purchaseId ? await Lot.findOne({ where: { purchaseId } }) : null;
  const jobs = lot ? await jobsOf(lot.id, cursor, limit + 1) : [];
  const { rows, nextCursor } = pageOf(jobs, limit);
  return accept({
    trail: { timeline: await timelineOf(invoice), lot: lot && (await presentLot(lot)), jobs: rows, nextCursor },
  });
}

async function timelineOf(invoice: Invoice): Promise<InvoiceTrail['timeline']> {
  const topUp = invoice.topUpId ? await TopUp.findByPk(invoice.topUpId) : null;
  const proForma = invoice.proFormaId ? await ProForma.findByPk(invoice.proFormaId) : null;
  const receipt = await InvoiceReceipt.findByPk(invoice.id);
  const corrections = await Invoice.findAll({ where: { correctsInvoiceId: invoice.id }, order: [['id', 'ASC']] });
  const disputes = await Dispute.findAll({ where: { invoiceId: invoice.id }, order: [['openedAt', 'ASC']] });
  const owed = await Receivable.findAll({ where: { invoiceId: invoice.id }, order: [['id', 'ASC']] });
  const returns = await CreditReturn.findAll({ where: { invoiceId: invoice.id, state: 'sent' } });
  const corrected = invoice.correctsInvoiceId ? await Invoice.findByPk(invoice.correctsInvoiceId) : null;
  const word = invoice.kind === 'invoice' ? 'Invoice' : 'Credit note';
  const steps = [
    topUp && { at: topUp.createdAt, words: 'Purchase begun' },
    proForma && {
      at: proForma.issuedAt,
      words: `Pro-forma ${proForma.number} asked for, due on ${dayText(proForma.dueAt)}`,
    },
    invoice.kind === 'invoice' && {
      at: invoice.paidAt,
      words: proForma ? 'Transfer received, credits issued' : 'Payment confirmed, credits issued',
    },
    { at: invoice.issuedAt, words: corrected ? `${word} issued, correcting ${corrected.number}` : `${word} issued` },
    receipt && { at: receipt.queuedAt, words: 'Receipt sent by e-mail' },
    ...disputes.flatMap(disputeSteps),
    ...corrections.map(({ issuedAt, number }) => ({ at: issuedAt, words: `Corrected by credit note ${number}` })),
    ...returns.map(({ sentAt, totalMinor, currency }) => ({
      at: sentAt ?? '',
      words: `${moneyText(totalMinor, currency)} sent back`,
    })),
    ...owed.flatMap(receivableSteps),
  ];
  // A stable sort: what happened in one instant stays in the order above.
  return steps.flatMap((step) => step || []).sort((one, other) => (one.at < other.at ? -1 : one.at > other.at ? 1 : 0));
}

const disputeSteps = ({ openedAt, decidedAt, state, totalMinor, currency }: Dispute) => [
  { at: openedAt, words: `The bank disputes ${moneyText(totalMinor, currency)}; unused credits are frozen` },
  decidedAt && {
    at: decidedAt,
    words:
      state === 'won'
        ? 'Dispute won: frozen credits can be used again'
        : `Dispute lost: the bank took ${moneyText(totalMinor, currency)} back`,
  },
];

const receivableSteps = ({ createdAt, decidedAt, state, totalMinor, currency, reason }: Receivable) => [
  {
    at: createdAt,
    words: `${state === 'open' ? `${moneyText(totalMinor, currency)} of it are owed for what was spent` : 'What was spent of it is owed'}; launching is suspended`,
  },
  decidedAt && {
    at: decidedAt,
    words: `${state === 'settled' ? 'What was owed is settled' : 'What was owed is written off'}: ${reason ?? ''}`,
  },
];

async function presentLot(lot: Lot): Promise<NonNullable<InvoiceTrail['lot']>> {
  const [drawn] = await database().query<{ spent: number | null; returned: number | null }>(
    `SELECT sum(amountMicrocredits) FILTER (WHERE kind = 'settlement') AS spent,
       sum(amountMicrocredits) FILTER (WHERE kind <> 'settlement') AS returned
     FROM lotDraws JOIN ledgerTransactions ON sequence = transactionSequence WHERE lotId = $lotId`,
    { type: QueryTypes.SELECT, bind: { lotId: lot.id } },
  );
  const [last] = await database().query<{ frozen: number }>(
    `SELECT frozenMicrocredits AS frozen FROM lotDraws WHERE lotId = $lotId ORDER BY transactionSequence DESC LIMIT 1`,
    { type: QueryTypes.SELECT, bind: { lotId: lot.id } },
  );
  const spent = drawn?.spent ?? 0;
  const returned = drawn?.returned ?? 0;
  return {
    id: lot.id,
    creditsMicrocredits: lot.creditsMicrocredits,
    spentMicrocredits: spent,
    returnedMicrocredits: returned,
    frozenMicrocredits: last?.frozen ?? 0,
    remainingMicrocredits: lot.creditsMicrocredits - spent - returned,
  };
}

const jobsOf = (lotId: string, before: string | undefined, count: number): Promise<InvoiceTrail['jobs']> =>
  database().query<InvoiceTrail['jobs'][number]>(
    `WITH drawn AS (
       SELECT own.jobId, sum(lotDraws.amountMicrocredits) AS drawnMicrocredits
       FROM lotDraws JOIN ledgerTransactions AS own ON own.sequence = lotDraws.transactionSequence
       WHERE lotId = $lotId AND own.kind = 'settlement' GROUP BY own.jobId)
     SELECT drawn.jobId AS id, coalesce(jobs.name, drawn.jobId) AS name, projectCodes.code AS projectCode,
       coalesce(users.name, 'Unknown') AS member, drawnMicrocredits
     FROM drawn LEFT JOIN jobs ON jobs.id = drawn.jobId
     LEFT JOIN projectCodes ON projectCodes.id = jobs.projectCodeId LEFT JOIN users ON users.id = jobs.userId
     WHERE $before IS NULL OR drawn.jobId < $before ORDER BY drawn.jobId DESC LIMIT $count`,
    { type: QueryTypes.SELECT, bind: { lotId, before: before ?? null, count } },
  );
