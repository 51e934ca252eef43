/** An invoice of the team, or the refusal. */
import { Invoice } from '@db/models/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { Permission } from '@/domain/teams/permissions.ts';
import { authorise, type Authorised } from '../teams/authorise.ts';

export async function findInvoice(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
  permission: Permission;
}): Promise<Result<{ invoice: Invoice; authorised: Authorised }>> {
  const authorised = await authorise(options);
  if (!authorised.ok) return authorised;
  const invoice = await Invoice.findOne({ where: { id: options.invoiceId, teamId: authorised.value.team.id } });
  return invoice
    ? accept({ invoice, authorised: authorised.value })
    : refuse('not_found', 'This team has no such invoice.');
}
