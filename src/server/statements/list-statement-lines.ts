/** The lines of a statement: what each launch and extension was charged in the month. */
import { LedgerTransaction } from '@db/models/ledger.ts';
import type { StatementLine } from '@/contracts/statements.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { cutAt } from './balances-at.ts';
import { spentBySegment, type SegmentSpending } from './spent-by-segment.ts';
import { statementMonth } from './statement-month.ts';

export async function listStatementLines(options: {
  actor: Actor;
  team: string;
  month?: string | undefined;
  limit?: number | undefined;
  /** The segment of the last line seen. */
  cursor?: string | undefined;
}): Promise<Result<{ lines: StatementLine[]; nextCursor: string | null }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const { team } = authorised.value;
  const asked = statementMonth(options.month, team.timeZone);
  if (!asked.ok) return asked;
  const [from, to] = await Promise.all([cutAt(team.id, asked.value.startsAt), cutAt(team.id, asked.value.endsAt)]);
  const limit = options.limit ?? limits.listPageDefault;
  const rows = await spentBySegment(
    team.id,
    { from: from.sequence, to: to.sequence },
    { before: options.cursor, count: limit + 1 },
  );
  const page = rows.slice(0, limit);
  return accept({
    lines: await presentLines(page),
    nextCursor: rows.length > limit ? (page.at(-1)?.segmentId ?? null) : null,
  });
}

async function presentLines(rows: readonly SegmentSpending[]): Promise<StatementLine[]> {
  const last = await LedgerTransaction.findAll({
    where: { sequence: rows.map(({ lastSequence }) => lastSequence) },
    attributes: ['sequence', 'occurredAt'],
  });
  const times = new Map(last.map(({ sequence, occurredAt }) => [sequence, occurredAt]));
  return rows.map((row) => ({
    segmentId: row.segmentId,
    jobId: row.jobId,
    jobName: row.jobName ?? row.jobId,
    extension: row.ordinal ?? 0,
    projectCode: row.projectCode,
    member: row.member ?? 'Unknown',
    lane: row.lane,
    charges: row.charges,
    lastChargedAt: times.get(row.lastSequence)!,
    spentMicrocredits: row.spentMicrocredits,
  }));
}
