/** The statement of a team for one calendar month in its time zone. */
import { Op } from 'sequelize';
import { Invoice } from '@db/models/billing.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import type { StatementDocument } from '@/contracts/statements.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { cutAt } from './balances-at.ts';
import { figuresBetween } from './figures-between.ts';
import { spentBySegment } from './spent-by-segment.ts';
import { statementMonth } from './statement-month.ts';
import { byLane, byMember, byProjectCode, sumSpending } from './sum-spending.ts';

export async function readStatement(options: {
  actor: Actor;
  team: string;
  /** `2026-12`; by default the present one. */
  month?: string | undefined;
}): Promise<Result<{ statement: StatementDocument }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const { team } = authorised.value;
  const asked = statementMonth(options.month, team.timeZone);
  if (!asked.ok) return asked;
  const { startsAt, endsAt } = asked.value;
  const [from, to] = await Promise.all([cutAt(team.id, startsAt), cutAt(team.id, endsAt)]);
  const [figures, segments, head, invoices] = await Promise.all([
    figuresBetween(team.id, from, to),
    spentBySegment(team.id, { from: from.sequence, to: to.sequence }),
    LedgerTransaction.findByPk(to.sequence, { attributes: ['sequence', 'hash', 'occurredAt'] }),
    Invoice.findAll({
      where: { teamId: team.id, issuedAt: { [Op.gte]: startsAt, [Op.lt]: endsAt } },
      attributes: ['id', 'number', 'kind', 'issuedAt', 'totalMinor', 'currency'],
      order: [['id', 'ASC']],
    }),
  ]);
  return accept({
    statement: {
      ...asked.value,
      timeZone: team.timeZone,
      ...figures,
      closing: {
        availableMicrocredits: to.balances.available,
        heldMicrocredits: to.balances.held,
        frozenMicrocredits: to.balances.frozen,
      },
      byProjectCode: sumSpending(segments, byProjectCode),
      byMember: sumSpending(segments, byMember),
      byLane: sumSpending(segments, byLane),
      lines: segments.length,
      invoices: invoices.map(({ id, number, kind, issuedAt, totalMinor, currency }) => ({
        id,
        number,
        kind,
        issuedAt,
        total: { amountMinor: totalMinor, currency },
      })),
      head: head && { sequence: head.sequence, hash: head.hash, occurredAt: head.occurredAt },
    },
  });
}
