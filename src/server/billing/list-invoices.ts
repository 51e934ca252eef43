/** Invoices of the team, newest first. */
import { literal, Op } from 'sequelize';
import { Invoice } from '@db/models/billing.ts';
import type { InvoiceSummary, reviewStates } from '@/contracts/billing.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { describeInvoices } from './describe-invoices.ts';
import { readPage, type PageRequest } from './page.ts';

type ReviewState = (typeof reviewStates)[number];

/** The ids of invoices whose newest review is in a state; one without a review is to be reviewed. */
const inReviewState: Record<ReviewState, string> = Object.fromEntries(
  (['to_review', 'questioned', 'approved'] as const).map((state) => [
    state,
    `(SELECT id FROM invoices AS each WHERE '${state}' = coalesce(
       (SELECT state FROM invoiceReviews WHERE invoiceId = each.id ORDER BY id DESC LIMIT 1), 'to_review'))`,
  ]),
) as Record<ReviewState, string>;

export async function listInvoices(
  options: { actor: Actor; team: string; review?: ReviewState | undefined } & PageRequest,
): Promise<Result<{ invoices: InvoiceSummary[]; nextCursor: string | null }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const teamId = authorised.value.team.id;
  const reviewed = options.review ? [{ id: { [Op.in]: literal(inReviewState[options.review]) } }] : [];
  const { rows, nextCursor } = await readPage(options, ({ where, ...query }) =>
    Invoice.findAll({ where: { [Op.and]: [where, { teamId }, ...reviewed] }, ...query }),
  );
  return accept({ invoices: await describeInvoices(rows), nextCursor });
}
