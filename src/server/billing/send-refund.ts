/** Tells the payment service to give the money of a return back; what was not answered is asked again. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { CreditReturn } from '@db/models/billing.ts';
import { nowText } from '../clock.ts';
import { log } from '../log.ts';
import { createRefund } from './payment-service.ts';

/**
 * Safe to call any number of times: the key was stored with the row, so the service refunds once. A refund that the
 * service finds wrong is marked failed, for an operator to look at; the credits have left already. Never throws.
 */
export async function sendRefund(returnId: string): Promise<void> {
  const row = await CreditReturn.findByPk(returnId);
  if (row?.state !== 'pending' || !row.paymentIntentId) return;
  const { paymentIntentId, totalMinor, idempotencyKey } = row;
  try {
    const sent = await createRefund({ returnId, paymentIntentId, totalMinor, idempotencyKey });
    if (!sent.ok) return;
    const { refundId, failed } = sent.value;
    await settle(returnId, {
      state: failed ? 'failed' : 'sent',
      serviceRefundId: refundId,
      sentAt: failed ? null : nowText(),
      problem: failed ? 'The bank returned the refund.' : null,
    });
  } catch (error) {
    log().error({ err: error, returnId }, 'the payment service refused a refund');
    await settle(returnId, { state: 'failed', problem: error instanceof Error ? error.message : 'Refused.' });
  }
}

const settle = (id: string, change: Partial<CreditReturn>): Promise<unknown> =>
  inWriteTransaction(() => CreditReturn.update(change, { where: { id, state: 'pending' } }));

/** A round of the billing part: refunds whose answer was lost. Answers how many were asked about. */
export async function sendOpenRefunds(): Promise<number> {
  const open = await CreditReturn.findAll({ where: { state: 'pending' }, attributes: ['id'], limit: 50 });
  for (const { id } of open) await sendRefund(id);
  return open.length;
}
