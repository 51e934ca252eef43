/** The payment service's customer of a team, made once. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PaymentCustomer } from '@db/models/billing.ts';
import type { Team } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { createCustomer } from './payment-service.ts';

/** The key is stored before the call, so a crash or a race in between makes no second customer. */
export async function ensureCustomer(team: Team): Promise<Result<string>> {
  const row = await inWriteTransaction(
    async () =>
      (await PaymentCustomer.findByPk(team.id)) ??
      PaymentCustomer.create({ teamId: team.id, idempotencyKey: `customer:${team.id}`, createdAt: nowText() }),
  );
  if (row.customerId) return accept(row.customerId);
  const made = await createCustomer({ teamId: team.id, name: team.name, idempotencyKey: row.idempotencyKey });
  if (!made.ok) return made;
  await inWriteTransaction(() => PaymentCustomer.update({ customerId: made.value }, { where: { teamId: team.id } }));
  return made;
}
