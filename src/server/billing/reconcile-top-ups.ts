/** Heals what webhooks did not bring: asks the payment service about top-ups that stay open. */
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PaymentEvent, TopUp } from '@db/models/billing.ts';
import { nowText } from '../clock.ts';
import { handlePaymentEvent } from './handle-payment-event.ts';
import { refreshTopUp } from './refresh-top-up.ts';

const firstWaitMs = 60_000;
const longestWaitMs = 60 * 60 * 1000;
const perRound = 50;
const attemptsOfEvents = 20;

/** `due` (the default) asks about those whose time has come, with growing pauses; `all` about every open one. */
export async function reconcileTopUps(
  options: { which?: 'due' | 'all' } = {},
): Promise<{ paid: number; asked: number }> {
  const events = await PaymentEvent.findAll({
    where: { state: 'recorded', attempts: { [Op.lt]: attemptsOfEvents } },
    order: [['receivedAt', 'ASC']],
    limit: perRound,
  });
  for (const { id } of events) await handlePaymentEvent(id);
  const open = await TopUp.findAll({
    where: {
      state: ['pending', 'processing'],
      ...(options.which === 'all' ? {} : { nextCheckAt: { [Op.lte]: nowText() } }),
    },
    order: [['nextCheckAt', 'ASC']],
    limit: options.which === 'all' ? 1_000 : perRound,
  });
  let paid = 0;
  for (const topUp of open) {
    const refreshed = await refreshTopUp(topUp.id);
    if (refreshed.ok && refreshed.value === 'paid') paid += 1;
    const wait = Math.min(longestWaitMs, firstWaitMs * 2 ** Math.min(topUp.checks, 20));
    await inWriteTransaction(() =>
      TopUp.update(
        { checks: topUp.checks + 1, nextCheckAt: nowText(wait) },
        { where: { id: topUp.id, state: ['pending', 'processing'] } },
      ),
    );
  }
  return { paid, asked: open.length };
}
