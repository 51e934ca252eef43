/** Sets who a team's invoices are made out to; what was issued before stays as it is. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { BillingDetailsRow } from '@db/models/billing.ts';
import type { BillingDetails } from '@/contracts/billing.ts';
import { checkVatNumber } from '@/domain/billing/check-vat-number.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { authorise } from '../teams/authorise.ts';

export async function setBillingDetails(options: {
  actor: Actor;
  team: string;
  billingDetails: BillingDetails;
}): Promise<Result<{ billingDetails: BillingDetails }>> {
  const authorised = await authorise({ ...options, permission: 'billing:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  const { vatNumber: given, ...rest } = options.billingDetails;
  const checked = given ? checkVatNumber(given, rest.country) : { ok: true as const, vatNumber: null };
  if (!checked.ok)
    return refuse('invalid_input', checked.reason, {
      errors: [{ path: 'vatNumber', code: 'invalid_vat_number', message: checked.reason }],
    });
  const billingDetails = { ...rest, vatNumber: checked.vatNumber };
  await inWriteTransaction(() =>
    BillingDetailsRow.upsert({ teamId: team.id, ...billingDetails, updatedAt: nowText(), updatedBy: userId }),
  );
  return accept({ billingDetails });
}
