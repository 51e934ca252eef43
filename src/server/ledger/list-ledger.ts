/** Ledger entries of a team, newest first, each with what the team had after it. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import type { LedgerEntry } from '@/contracts/ledger.ts';
import type { Posting, TransactionKind } from '@/domain/ledger/accounts.ts';
import { describeEntry } from '@/domain/ledger/describe-entry.ts';
import type { LotDraw, LotIssue } from '@/domain/ledger/lots.ts';
import { dayStartMs } from '@/domain/billing/month-start.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { lastSequenceBefore } from './last-sequence-before.ts';

export interface ListLedger {
  actor: Actor;
  team: string;
  limit?: number;
  /** The sequence of the last entry seen. */
  cursor?: string | undefined;
  kind?: TransactionKind | undefined;
  job?: string | undefined;
  lot?: string | undefined;
  /** Days in the team's time zone, both included. */
  from?: string | undefined;
  to?: string | undefined;
}

interface Row {
  id: string;
  sequence: number;
  kind: TransactionKind;
  occurredAt: string;
  jobId: string | null;
  userId: string | null;
  userName: string | null;
  postings: string;
  lots: string;
  draws: string;
  memo: string;
  hash: string;
  available: number | null;
  held: number | null;
}

/** The balance of an account after the transaction at hand. */
const balanceThen = (account: string) => `(
  SELECT balanceMicrocredits FROM ledgerPostings
  WHERE teamId = $teamId AND account = '${account}' AND transactionSequence <= entry.sequence
  ORDER BY transactionSequence DESC LIMIT 1)`;

const ofLot = `
  SELECT transactionSequence FROM lots WHERE id = $lot UNION SELECT transactionSequence FROM lotDraws WHERE lotId = $lot`;

/** Days as places in the chain, so that a long ledger is not read through for an old month. */
async function daysOf(teamId: string, timeZone: string, { from, to }: Pick<ListLedger, 'from' | 'to'>) {
  const startOf = (day: string, later = 0) => new Date(dayStartMs(day, timeZone, later)).toISOString();
  return {
    after: from ? await lastSequenceBefore(teamId, startOf(from)) : 0,
    last: to ? await lastSequenceBefore(teamId, startOf(to, 1)) : Number.MAX_SAFE_INTEGER,
  };
}

export async function listLedger(
  options: ListLedger,
): Promise<Result<{ entries: LedgerEntry[]; nextCursor: string | null }>> {
  const { actor, team, limit = limits.listPageDefault, cursor, kind, job, lot } = options;
  const authorised = await authorise({ actor, team, permission: 'credits:read' });
  if (!authorised.ok) return authorised;
  if (cursor !== undefined && !/^\d{1,15}$/.test(cursor))
    return refuse('invalid_input', 'This cursor is not one of ours. Leave it out to begin at the newest entry.');
  const { id: teamId, timeZone } = authorised.value.team;
  const { after, last } = await daysOf(teamId, timeZone, options);
  const rows = await database().query<Row>(
    `SELECT entry.id, entry.sequence, kind, occurredAt, jobId, userId, users.name AS userName,
       postings, lots, draws, memo, hash,
       ${balanceThen('available')} AS available, ${balanceThen('held')} AS held
     FROM ledgerTransactions AS entry LEFT JOIN users ON users.id = entry.userId
     WHERE teamId = $teamId AND sequence < $before AND sequence > $after AND sequence <= $last
       ${kind ? 'AND kind = $kind' : ''} ${job ? 'AND jobId = $job' : ''} ${lot ? `AND sequence IN (${ofLot})` : ''}
     ORDER BY sequence DESC LIMIT $count`,
    {
      type: QueryTypes.SELECT,
      bind: {
        teamId,
        before: cursor ? Number(cursor) : Number.MAX_SAFE_INTEGER,
        after,
        last,
        ...(kind ? { kind } : {}),
        ...(job ? { job } : {}),
        ...(lot ? { lot } : {}),
        count: limit + 1,
      },
    },
  );
  const page = rows.slice(0, limit);
  return accept({
    entries: page.map((row) => entryOf(row, teamId)),
    nextCursor: rows.length > limit ? String(page.at(-1)?.sequence) : null,
  });
}

function entryOf(row: Row, teamId: string): LedgerEntry {
  const postings = (JSON.parse(row.postings) as Posting[]).filter((posting) => posting.teamId === teamId);
  const memo = JSON.parse(row.memo) as Record<string, unknown>;
  const change = (account: string) => postings.find((posting) => posting.account === account)?.amountMicrocredits ?? 0;
  const text = (value: unknown) => (typeof value === 'string' ? value : null);
  return {
    id: row.id,
    sequence: row.sequence,
    kind: row.kind,
    occurredAt: row.occurredAt,
    description: describeEntry(row.kind, postings, memo),
    jobId: row.jobId,
    person: row.userId && row.userName ? { id: row.userId, name: row.userName } : null,
    availableChangeMicrocredits: change('available'),
    heldChangeMicrocredits: change('held'),
    spentChangeMicrocredits: change('spent'),
    availableMicrocredits: row.available ?? 0,
    heldMicrocredits: row.held ?? 0,
    lotIds: [
      ...(JSON.parse(row.lots) as LotIssue[]).filter((lot) => lot.teamId === teamId).map(({ id }) => id),
      ...(JSON.parse(row.draws) as LotDraw[]).filter((draw) => draw.teamId === teamId).map(({ lotId }) => lotId),
    ],
    events: text(memo['events']),
    absorbedEvents: text(memo['absorbedEvents']),
    hash: row.hash,
  };
}
