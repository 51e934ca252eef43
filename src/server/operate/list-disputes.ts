/** Disputes, what teams owe after them, and credits taken back, of all teams. */
import { CreditReturn, Invoice } from '@db/models/billing.ts';
import { Dispute, Receivable } from '@db/models/cards.ts';
import type { DisputesAnswer } from '@/contracts/disputes.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { namesOfTeams } from './names-of-teams.ts';
import { requireOperator } from './require-operator.ts';

const shown = 50;

export async function listDisputes(options: { actor: Actor }): Promise<Result<DisputesAnswer>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const [disputes, receivables, returns] = await Promise.all([
    Dispute.findAll({ order: [['openedAt', 'DESC']], limit: shown }),
    // What is open first.
    Receivable.findAll({
      order: [
        ['decidedAt', 'ASC NULLS FIRST'],
        ['id', 'DESC'],
      ],
      limit: shown,
    }),
    CreditReturn.findAll({ order: [['createdAt', 'DESC']], limit: shown }),
  ]);
  const rows = [...disputes, ...receivables, ...returns];
  const teamOf = await namesOfTeams(rows.map(({ teamId }) => teamId));
  const invoices = await Invoice.findAll({
    where: { id: rows.map(({ invoiceId }) => invoiceId) },
    attributes: ['id', 'number'],
  });
  const about = (row: { teamId: string; invoiceId: string; totalMinor: number; currency: string }) => ({
    team: teamOf(row.teamId),
    invoiceId: row.invoiceId,
    invoiceNumber: invoices.find(({ id }) => id === row.invoiceId)?.number ?? '',
    total: { amountMinor: row.totalMinor, currency: row.currency },
  });
  return accept({
    disputes: disputes.map((row) => ({
      id: row.id,
      ...about(row),
      state: row.state,
      reason: row.reason,
      openedAt: row.openedAt,
      decidedAt: row.decidedAt,
      frozenMicrocredits: row.frozenMicrocredits,
      takenMicrocredits: row.takenMicrocredits,
      problem: row.problem,
    })),
    receivables: receivables.map((row) => ({
      id: row.id,
      ...about(row),
      state: row.state,
      createdAt: row.createdAt,
      decidedAt: row.decidedAt,
      reason: row.reason,
    })),
    returns: returns.map((row) => ({
      id: row.id,
      ...about(row),
      cause: row.cause,
      state: row.state,
      amountMicrocredits: row.amountMicrocredits,
      createdAt: row.createdAt,
      problem: row.problem,
    })),
  });
}
