/** How the charge of a job came about: price, events, rounding, absorbed work, lots and ledger transactions. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { Invoice } from '@db/models/billing.ts';
import type { JobCost } from '@/contracts/job-cost.ts';
import type { TransactionKind } from '@/domain/ledger/accounts.ts';
import type { Lane, MethodFamily } from '@/domain/pricing/price-book.ts';
import { exactChargeText } from '@/domain/pricing/exact-charge.ts';
import { chargeMicrocredits } from '@/domain/pricing/price-of.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { findJob } from './find-job.ts';

export async function readJobCost(options: {
  actor: Actor;
  team: string;
  job: string;
}): Promise<Result<{ cost: JobCost }>> {
  const authorised = await authorise({ ...options, permission: 'credits:read' });
  if (!authorised.ok) return authorised;
  const teamId = authorised.value.team.id;
  const found = await findJob({ teamId, job: options.job });
  if (!found.ok) return found;
  const job = found.value;
  const bind = { jobId: job.id, teamId };
  const [segments, lots, transactions, [code]] = await Promise.all([
    readSegments(bind),
    readLots(bind),
    database().query<{ kind: TransactionKind; count: number; amountMicrocredits: number }>(
      `SELECT kind, count(DISTINCT sequence) AS count, coalesce(sum(max(0, amountMicrocredits)), 0) AS amountMicrocredits
       FROM ledgerTransactions LEFT JOIN ledgerPostings ON transactionSequence = sequence
       WHERE jobId = $jobId AND ledgerTransactions.teamId = $teamId GROUP BY kind ORDER BY min(sequence)`,
      { type: QueryTypes.SELECT, bind },
    ),
    database().query<{ code: string }>('SELECT code FROM projectCodes WHERE id = $id', {
      type: QueryTypes.SELECT,
      bind: { id: job.projectCodeId },
    }),
  ]);
  return accept({
    cost: {
      jobId: job.id,
      jobName: job.name,
      projectCode: code?.code ?? null,
      chargedMicrocredits: segments.reduce((sum, segment) => sum + segment.chargedMicrocredits, 0),
      segments,
      lots,
      transactions,
    },
  });
}

interface SegmentRow {
  id: string;
  ordinal: number;
  launchedBy: string;
  startedAt: string;
  priceBookVersion: number;
  lane: Lane;
  family: MethodFamily;
  rate: number;
  events: number;
  absorbedEvents: number;
  cap: number;
  held: number;
  spent: number;
}

/** Charged and held as the ledger has them, the rest as the meter noted it. */
async function readSegments(bind: { jobId: string; teamId: string }): Promise<JobCost['segments']> {
  const total = (column: string) =>
    `(SELECT ${column} FROM ledgerTransactions WHERE segmentId = segments.id ORDER BY sequence DESC LIMIT 1)`;
  const rows = await database().query<SegmentRow>(
    `SELECT segments.id, ordinal, users.name AS launchedBy, priceBooks.version AS priceBookVersion,
       (SELECT occurredAt FROM ledgerTransactions WHERE segmentId = segments.id ORDER BY sequence LIMIT 1) AS startedAt,
       quotes.inputs ->> 'lane' AS lane, quotes.inputs ->> 'method' AS family,
       segments.microcreditsPerMillionEvents AS rate, segments.events, segments.capMicrocredits AS cap,
       (SELECT coalesce(sum(absorbedEvents), 0) FROM batches WHERE segmentId = segments.id) AS absorbedEvents,
       ${total('segmentHeldMicrocredits')} AS held, ${total('segmentSpentMicrocredits')} AS spent
     FROM segments JOIN users ON users.id = segments.userId JOIN quotes ON quotes.id = segments.quoteId
     JOIN priceBooks ON priceBooks.id = segments.priceBookId
     WHERE jobId = $jobId ORDER BY ordinal`,
    { type: QueryTypes.SELECT, bind: { jobId: bind.jobId } },
  );
  return rows.map(({ rate, events, absorbedEvents, cap, held, spent, ...row }) => ({
    ...row,
    microcreditsPerMillionEvents: rate,
    events: String(events),
    exactCredits: exactChargeText(events, rate),
    chargedMicrocredits: spent,
    absorbedEvents: String(absorbedEvents),
    absorbedMicrocredits: chargeMicrocredits(absorbedEvents, rate),
    royaltyMicrocredits: 0,
    capMicrocredits: cap,
    heldMicrocredits: held,
    releasedMicrocredits: cap - held - spent,
  }));
}

async function readLots(bind: { jobId: string; teamId: string }): Promise<JobCost['lots']> {
  const rows = await database().query<{
    id: string;
    source: 'grant' | 'royalty' | 'bought';
    purchaseId: string | null;
    drawnMicrocredits: number;
  }>(
    `SELECT lots.id, lots.source, lots.purchaseId, sum(lotDraws.amountMicrocredits) AS drawnMicrocredits
     FROM ledgerTransactions AS own JOIN lotDraws ON lotDraws.transactionSequence = own.sequence
     JOIN lots ON lots.id = lotDraws.lotId
     WHERE own.jobId = $jobId AND own.teamId = $teamId GROUP BY lots.id ORDER BY min(own.sequence), lots.transactionSequence`,
    { type: QueryTypes.SELECT, bind },
  );
  const purchases = rows.flatMap(({ purchaseId }) => purchaseId ?? []);
  const attributes = ['id', 'number', 'topUpId', 'proFormaId'];
  const invoices = [
    ...(await Invoice.findAll({ where: { topUpId: purchases }, attributes })),
    ...(await Invoice.findAll({ where: { proFormaId: purchases }, attributes })),
  ];
  return rows.map(({ purchaseId, ...lot }) => {
    const paid = invoices.find((each) => purchaseId !== null && [each.topUpId, each.proFormaId].includes(purchaseId));
    return { ...lot, invoice: paid ? { id: paid.id, number: paid.number } : null };
  });
}
