/** Invoices of the team, newest first. */
import type { InvoiceFilters, InvoiceSummary } from '@/contracts/invoices.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { pageOf } from '../http/page-of.ts';
import { authorise } from '../teams/authorise.ts';
import { describeInvoices } from './describe-invoices.ts';
import type { PageRequest } from './page.ts';
import { selectInvoices } from './select-invoices.ts';

export async function listInvoices(
  options: { actor: Actor; team: string } & InvoiceFilters & PageRequest,
): Promise<Result<{ invoices: InvoiceSummary[]; nextCursor: string | null }>> {
  const { actor, team, cursor, limit = limits.listPageDefault, ...filters } = options;
  const authorised = await authorise({ actor, team, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const found = await selectInvoices({ team: authorised.value.team, filters, cursor, count: limit + 1 });
  const { rows, nextCursor } = pageOf(found, limit);
  return accept({ invoices: await describeInvoices(rows), nextCursor });
}
