/** Invoices whose newest review is a question, of all teams. */
import { literal, Op } from 'sequelize';
import { Invoice } from '@db/models/billing.ts';
import type { AskedInvoice } from '@/contracts/operate.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { describeInvoices } from '../billing/describe-invoices.ts';
import { readPage, type PageRequest } from '../billing/page.ts';
import { namesOfTeams } from './names-of-teams.ts';
import { requireOperator } from './require-operator.ts';

const questioned = literal(`(SELECT invoiceId FROM invoiceReviews AS newest WHERE state = 'questioned' AND NOT EXISTS (
  SELECT 1 FROM invoiceReviews AS later WHERE later.invoiceId = newest.invoiceId AND later.id > newest.id))`);

export async function listQuestionedInvoices(
  options: { actor: Actor } & PageRequest,
): Promise<Result<{ invoices: AskedInvoice[]; nextCursor: string | null }>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const { rows, nextCursor } = await readPage(options, ({ where, ...query }) =>
    Invoice.findAll({ where: { [Op.and]: [where, { id: { [Op.in]: questioned } }] }, ...query }),
  );
  return accept({ invoices: await askedInvoices(rows), nextCursor });
}

export async function askedInvoices(rows: Invoice[]): Promise<AskedInvoice[]> {
  const teamOf = await namesOfTeams(rows.map(({ teamId }) => teamId));
  const described = await describeInvoices(rows);
  return described.map((each, index) => ({ ...each, team: teamOf(rows[index]!.teamId) }));
}
