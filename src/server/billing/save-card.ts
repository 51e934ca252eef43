/** Begins saving a card: stores the visit, opens the service's page, answers where it is. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { CardSetup } from '@db/models/cards.ts';
import type { Team } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { paths } from '@/paths.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { answerOnce, recallAnswer, type Idempotency } from '../http/answer-once.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import { ensureCustomer } from './ensure-customer.ts';
import { openCardPage } from './payment-cards.ts';

/** How long the service keeps its page open. */
const pageMs = 24 * 60 * 60 * 1000;
const firstCheckMs = 60_000;

export async function saveCard(options: {
  actor: Actor;
  team: string;
  idempotency?: Idempotency | undefined;
}): Promise<Result<{ pageUrl: string }>> {
  const { actor, idempotency } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'billing:write' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  const recalled = await recallAnswer<{ pageUrl: string }>(idempotency);
  if (recalled) return recalled;
  const setup = await storeSetup({ team, userId, idempotency });
  const opened = await openFor(setup, team);
  if (!opened.ok) return opened;
  const { sessionId, url: pageUrl } = opened.value;
  return answerOnce(idempotency, async () => {
    await CardSetup.update({ sessionId, pageUrl }, { where: { id: setup.id } });
    return accept({ pageUrl });
  });
}

/** A repeated request with the same key finds the visit of the first. */
async function storeSetup(options: {
  team: Team;
  userId: string | null;
  idempotency: Idempotency | undefined;
}): Promise<CardSetup> {
  const { team, userId, idempotency } = options;
  const requestKey = idempotency ? `${idempotency.scope} | ${idempotency.key}` : null;
  return inWriteTransaction(async () => {
    const earlier = requestKey ? await CardSetup.findOne({ where: { requestKey } }) : null;
    if (earlier) return earlier;
    const id = newId('setup');
    return CardSetup.create({
      id,
      teamId: team.id,
      userId,
      requestKey,
      state: 'pending',
      idempotencyKey: `card:${id}`,
      createdAt: nowText(),
      expiresAt: nowText(pageMs),
      nextCheckAt: nowText(firstCheckMs),
    });
  });
}

async function openFor(setup: CardSetup, team: Team): Promise<Result<{ sessionId: string; url: string }>> {
  if (setup.sessionId && setup.pageUrl) return accept({ sessionId: setup.sessionId, url: setup.pageUrl });
  const customer = await ensureCustomer(team);
  if (!customer.ok) return customer;
  await inWriteTransaction(() => CardSetup.update({ customerId: customer.value }, { where: { id: setup.id } }));
  const back = `${env().PUBLIC_URL}${paths.automaticTopUp(team.slug)}`;
  return openCardPage({
    setupId: setup.id,
    teamId: team.id,
    customerId: customer.value,
    successUrl: `${back}?card=saved`,
    cancelUrl: back,
    idempotencyKey: setup.idempotencyKey,
  });
}
