/** Who a team's invoices are made out to. */
import { BillingDetailsRow } from '@db/models/billing.ts';
import type { BillingDetails } from '@/contracts/billing.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';

export async function readBillingDetails(options: {
  actor: Actor;
  team: string;
}): Promise<Result<{ billingDetails: BillingDetails | null }>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const row = await BillingDetailsRow.findByPk(authorised.value.team.id);
  if (!row) return accept({ billingDetails: null });
  const { name, address, country, vatNumber, email } = row;
  return accept({ billingDetails: { name, address, country, vatNumber, email } });
}
