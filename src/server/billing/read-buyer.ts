/** Who a team's invoices are made out to. */
import { BillingDetailsRow } from '@db/models/billing.ts';
import type { Team } from '@db/models/people.ts';
import type { Party } from '@/domain/billing/invoice-face.ts';
import { seller } from './seller.ts';

/**
 * The stored details, or the team's name in the seller's country until there are any: a simplified invoice, taxed
 * like a sale to a consumer at home.
 */
export async function readBuyer(team: Team): Promise<{ buyer: Party; complete: boolean }> {
  const row = await BillingDetailsRow.findByPk(team.id);
  if (!row)
    return { buyer: { name: team.name, address: '', country: seller().country, vatNumber: null }, complete: false };
  const { name, address, country, vatNumber } = row;
  return { buyer: { name, address, country, vatNumber }, complete: true };
}
