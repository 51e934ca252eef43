/** Who is written to about money. */
import { BillingDetailsRow } from '@db/models/billing.ts';
import { Membership, User } from '@db/models/people.ts';

/** The address in the billing details, or the owners; and whoever bought, while still a member. */
export async function moneyRecipients(options: { teamId: string; buyerUserId: string | null }): Promise<string[]> {
  const { teamId, buyerUserId } = options;
  const details = await BillingDetailsRow.findByPk(teamId);
  const members = await Membership.findAll({ where: { teamId, removedAt: null } });
  const written = members.filter(
    ({ userId, roles }) => userId === buyerUserId || (!details?.email && roles.includes('owner')),
  );
  const people = await User.findAll({ where: { id: written.map(({ userId }) => userId) }, attributes: ['email'] });
  return [...new Set([...(details?.email ? [details.email] : []), ...people.map(({ email }) => email)])];
}

/** Every owner, and the address in the billing details. */
export async function ownersAndBillingAddress(teamId: string): Promise<string[]> {
  const details = await BillingDetailsRow.findByPk(teamId);
  const members = await Membership.findAll({ where: { teamId, removedAt: null } });
  const owners = members.filter(({ roles }) => roles.includes('owner')).map(({ userId }) => userId);
  const people = await User.findAll({ where: { id: owners }, attributes: ['email'] });
  return [...new Set([...people.map(({ email }) => email), ...(details?.email ? [details.email] : [])])];
}
