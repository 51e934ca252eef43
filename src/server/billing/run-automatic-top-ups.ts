/** Begins automatic top-ups of teams that have fallen under their threshold; the card is charged by `refreshTopUp`. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PaymentCustomer, TopUp } from '@db/models/billing.ts';
import { AutomaticTopUp, SavedCard } from '@db/models/cards.ts';
import { Team } from '@db/models/people.ts';
import { decideAutomaticTopUp } from '@/domain/billing/decide-automatic-top-up.ts';
import type { Currency } from '@/domain/pricing/price-book.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { readBalance } from '../ledger/read-balance.ts';
import { log } from '../log.ts';
import { checkNothingOwed } from './check-nothing-owed.ts';
import { pricePurchase } from './price-purchase.ts';
import { readAutomaticSpending } from './read-automatic-spending.ts';
import { refreshTopUp } from './refresh-top-up.ts';
import { stopAutomaticTopUp } from './stop-automatic-top-up.ts';
import { tellOfCeiling } from './tell-of-ceiling.ts';

/** How long the service remembers the key of a charge, with an hour to spare: until then asking again charges once. */
const keyHoldsMs = 23 * 60 * 60 * 1000;
const firstCheckMs = 60_000;

/** Answers how many were begun. A charge that is not answered is asked about again by the reconciler. */
export async function runAutomaticTopUps(): Promise<number> {
  let begun = 0;
  for (const teamId of await teamsUnderThreshold()) {
    const topUp = await begin(teamId);
    if (!topUp) continue;
    begun += 1;
    try {
      await refreshTopUp(topUp.id);
    } catch (error) {
      log().error({ err: error, topUpId: topUp.id }, 'an automatic top-up could not be charged');
    }
  }
  return begun;
}

/** Cheap enough to ask after every change of a ledger. */
async function teamsUnderThreshold(): Promise<string[]> {
  const rows = await database().query<{ teamId: string }>(
    `SELECT teamId FROM automaticTopUps AS setting WHERE state = 'on' AND thresholdMicrocredits > coalesce(
       (SELECT balanceMicrocredits FROM ledgerPostings WHERE teamId = setting.teamId AND account = 'available'
        ORDER BY transactionSequence DESC LIMIT 1), 0)`,
    { type: QueryTypes.SELECT },
  );
  return rows.map(({ teamId }) => teamId);
}

/** Everything is read again inside the write transaction, and the key of the charge stored before the call. */
async function begin(teamId: string): Promise<TopUp | null> {
  return inWriteTransaction(async () => {
    const setting = await AutomaticTopUp.findByPk(teamId);
    const team = await Team.findByPk(teamId);
    const card = await SavedCard.findOne({ where: { teamId, removedAt: null } });
    const customer = await PaymentCustomer.findByPk(teamId);
    if (setting?.state !== 'on' || !team || team.suspendedAt || !card || !customer?.customerId) return null;
    if (!(await checkNothingOwed(teamId)).ok) return null;
    if (await TopUp.findOne({ where: { teamId, way: 'automatic', state: ['pending', 'processing'] } })) return null;
    const { pack, monthlyCeilingMinor, thresholdMicrocredits } = setting;
    const currency = setting.currency as Currency;
    const priced = await pricePurchase({ team, pack, currency });
    if (!priced.ok) {
      await stopAutomaticTopUp({ team, problem: priced.detail, needsHolder: false, attempt: null });
      return null;
    }
    const { priceBookId, creditsMicrocredits, netMinor, taxMinor, totalMinor, tax, buyer } = priced.value;
    const { month, spentMinor } = await readAutomaticSpending({ team, currency });
    const decision = decideAutomaticTopUp({
      availableMicrocredits: (await readBalance(teamId)).available,
      thresholdMicrocredits,
      totalMinor,
      spentThisMonthMinor: spentMinor,
      monthlyCeilingMinor,
    });
    if (decision.kind === 'ceiling') await tellOfCeiling({ team, setting, month, spentMinor });
    if (decision.kind !== 'begin') return null;
    const id = newId('topup');
    return TopUp.create({
      id,
      teamId,
      userId: setting.updatedBy,
      state: 'pending',
      way: 'automatic',
      paymentMethodId: card.paymentMethodId,
      pack,
      priceBookId,
      creditsMicrocredits,
      currency,
      netMinor,
      taxMinor,
      totalMinor,
      tax,
      buyer,
      customerId: customer.customerId,
      idempotencyKey: `automatic:${id}`,
      createdAt: nowText(),
      expiresAt: nowText(keyHoldsMs),
      nextCheckAt: nowText(firstCheckMs),
    });
  });
}
