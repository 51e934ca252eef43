/** Begins buying a pack by card: stores the top-up, opens the hosted checkout, answers where to pay. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { TopUp } from '@db/models/billing.ts';
import type { Team } from '@db/models/people.ts';
import type { Currency } from '@/domain/pricing/price-book.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { paths } from '@/paths.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { answerOnce, recallAnswer, type Idempotency } from '../http/answer-once.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import { ensureCustomer } from './ensure-customer.ts';
import { openCheckout } from './payment-service.ts';
import { pricePurchase } from './price-purchase.ts';

export interface StartTopUp {
  actor: Actor;
  team: string;
  pack: string;
  currency: Currency;
  idempotency?: Idempotency | undefined;
}

type Started = { checkoutUrl: string; topUpId: string };

/** How long a checkout stays open; the service allows up to 24 hours. */
const checkoutMs = 23 * 60 * 60 * 1000;
const firstCheckMs = 60_000;

export async function startTopUp(options: StartTopUp): Promise<Result<Started>> {
  const { actor, pack, currency, idempotency } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'billing:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  const recalled = await recallAnswer<Started>(idempotency);
  if (recalled) return recalled;

  const stored = await storeTopUp({ team, userId, pack, currency, idempotency });
  if (!stored.ok) return stored;
  const topUp = stored.value;
  const opened = await openFor(topUp, team);
  if (!opened.ok) return opened;
  return answerOnce(idempotency, async () => {
    await TopUp.update(
      { checkoutUrl: opened.value.url, sessionId: opened.value.sessionId },
      { where: { id: topUp.id } },
    );
    return accept({ checkoutUrl: opened.value.url, topUpId: topUp.id });
  });
}

/** A repeated request with the same key finds the top-up of the first, even while that is still on its way. */
async function storeTopUp(options: {
  team: Team;
  userId: string | null;
  pack: string;
  currency: Currency;
  idempotency: Idempotency | undefined;
}): Promise<Result<TopUp>> {
  const { team, userId, pack, currency, idempotency } = options;
  const requestKey = idempotency ? `${idempotency.scope} | ${idempotency.key}` : null;
  return inWriteTransaction(async () => {
    const earlier = requestKey ? await TopUp.findOne({ where: { requestKey } }) : null;
    if (earlier)
      return earlier.pack === pack && earlier.currency === currency
        ? accept(earlier)
        : refuse('idempotency_key_reused', 'This Idempotency-Key was used for another top-up. Use a new key.');
    const priced = await pricePurchase({ team, pack, currency });
    if (!priced.ok) return priced;
    const id = newId('topup');
    const { priceBookId, creditsMicrocredits, netMinor, taxMinor, totalMinor, tax, buyer } = priced.value;
    const topUp = await TopUp.create({
      id,
      teamId: team.id,
      userId,
      requestKey,
      state: 'pending',
      pack,
      priceBookId,
      creditsMicrocredits,
      currency,
      netMinor,
      taxMinor,
      totalMinor,
      tax,
      buyer,
      idempotencyKey: `checkout:${id}`,
      createdAt: nowText(),
      expiresAt: nowText(checkoutMs),
      nextCheckAt: nowText(firstCheckMs),
    });
    return accept(topUp);
  });
}

async function openFor(topUp: TopUp, team: Team): Promise<Result<{ sessionId: string; url: string }>> {
  if (topUp.sessionId && topUp.checkoutUrl) return accept({ sessionId: topUp.sessionId, url: topUp.checkoutUrl });
  const customer = await ensureCustomer(team);
  if (!customer.ok) return customer;
  await inWriteTransaction(() => TopUp.update({ customerId: customer.value }, { where: { id: topUp.id } }));
  const back = `${env().PUBLIC_URL}${paths.credits(team.slug)}?topUp=${topUp.id}`;
  return openCheckout({
    topUpId: topUp.id,
    teamId: team.id,
    customerId: customer.value,
    description: `${Number(topUp.pack).toLocaleString('en')} Burette credits`,
    totalMinor: topUp.totalMinor,
    currency: topUp.currency,
    successUrl: back,
    cancelUrl: `${back}&cancelled=1`,
    expiresAt: topUp.expiresAt,
    idempotencyKey: topUp.idempotencyKey,
  });
}
