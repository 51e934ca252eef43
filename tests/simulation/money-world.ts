/** One team, our services and the payment fake: what can happen to money, one act at a time, by its place in a sequence. */
import Stripe from 'stripe';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Invoice, TopUp } from '@db/models/billing.ts';
import { Team } from '@db/models/people.ts';
import { receivePaymentEvent } from '@/server/billing/receive-payment-event.ts';
import { refreshDispute } from '@/server/billing/refresh-dispute.ts';
import { refreshTopUp } from '@/server/billing/refresh-top-up.ts';
import { refundPurchase } from '@/server/billing/refund-purchase.ts';
import { sendOpenRefunds } from '@/server/billing/send-refund.ts';
import { startTopUp } from '@/server/billing/start-top-up.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { readSegment } from '@/server/ledger/read-segment.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { decideDispute, openDispute } from '@tests/fakes/payment/api-reversals.ts';
import type { PaymentFake } from '@tests/fakes/payment/server.ts';
import type { FakeSession, State } from '@tests/fakes/payment/state.ts';
import { cards } from '@tests/support/payment-cards.ts';
import { plainTeam } from '@tests/support/plain-team.ts';

export const webhookSecret = 'whsec_simulation';
const system = { kind: 'system', reason: 'simulation' } as const;
const signer = new Stripe('simulation-key');
const packs = ['25', '100'];

export const actNames = [
  'grant',
  'openCheckout',
  'payByCard',
  'payByDebit',
  'passTime',
  'deliverEvent',
  'reconcile',
  'hold',
  'settle',
  'release',
  'refund',
  'sendRefunds',
  'dispute',
  'decideDispute',
  'serviceFails',
  'crash',
] as const;
export interface Act {
  name: (typeof actNames)[number];
  /** Which of several things: a session, an event, a segment. */
  place: number;
  amount: number;
}

/** Acts that end in our own database alone, so that a crash before their commit leaves nothing anywhere. */
const ownActs = ['grant', 'deliverEvent', 'reconcile', 'hold', 'settle', 'release'] as const;

class Crash extends Error {}

export class MoneyWorld {
  readonly fake: PaymentFake;
  readonly teamId: string;
  readonly #slug: string;

  private constructor(fake: PaymentFake, team: Team) {
    this.fake = fake;
    this.teamId = team.id;
    this.#slug = team.slug;
  }

  /** A new team, and a payment service that has forgotten everything and delivers no event by itself. */
  static async open(fake: PaymentFake): Promise<MoneyWorld> {
    const { state } = fake.store;
    for (const name of ['sessions', 'lines', 'intents', 'methods', 'refunds', 'disputes', 'debits', 'answers'] as const)
      (state[name] as State[typeof name]) = {};
    state.events.length = 0;
    Object.assign(state.switches, { lose: Number.MAX_SAFE_INTEGER, failNext: 0, hangNext: 0 });
    const team = await Team.findByPk(await plainTeam(), { rejectOnEmpty: true });
    return new MoneyWorld(fake, team);
  }

  /** Impossible acts do nothing. `step` names the act, so that performing it again is a repetition. */
  async perform(step: string, { name, place, amount }: Act): Promise<void> {
    const { teamId } = this;
    const id = `${teamId}-${step}`;
    const segment = { teamId, jobId: `${teamId}-job${place}`, segmentId: `${teamId}-segment${place}` };
    switch (name) {
      case 'grant':
        await grantCredits({ teamId, amountMicrocredits: amount, reason: 'Goodwill', grantId: id });
        return;
      case 'openCheckout':
        await startTopUp({ actor: system, team: this.#slug, pack: packs[place % 2]!, currency: 'EUR' });
        return;
      case 'payByCard': {
        const session = await this.#openSession(place);
        if (session) this.#payByCard(session, amount);
        return;
      }
      case 'payByDebit': {
        const session = await this.#openSession(place);
        if (session) this.fake.payments.payByDebit(session, amount % 3 > 0);
        return;
      }
      case 'passTime':
        this.fake.store.state.clockOffsetSeconds += place * 86_400;
        this.fake.payments.passTime();
        return;
      case 'deliverEvent':
        return this.#deliver(amount);
      case 'reconcile':
        return this.#askAboutEverything();
      case 'hold': {
        const { heldMicrocredits, spentMicrocredits } = await readSegment(segment.segmentId);
        if (heldMicrocredits + spentMicrocredits === 0)
          await holdCredits({ ...segment, amountMicrocredits: amount, userId: null });
        return;
      }
      case 'settle': {
        const { heldMicrocredits } = await readSegment(segment.segmentId);
        const chargeMicrocredits = amount % (heldMicrocredits + 1);
        const memo = { events: String(chargeMicrocredits) };
        await settleCharge({ ...segment, settlementId: id, chargeMicrocredits, memo });
        return;
      }
      case 'release':
        await releaseHold({ ...segment, releaseId: id });
        return;
      case 'refund': {
        const invoices = await Invoice.findAll({ where: { teamId, kind: 'invoice' }, order: [['number', 'ASC']] });
        const invoice = invoices[place % Math.max(1, invoices.length)];
        const amountMicrocredits = place % 2 === 0 ? undefined : amount;
        if (invoice)
          await refundPurchase({ actor: system, invoiceId: invoice.id, amountMicrocredits, reason: 'Not needed.' });
        return;
      }
      case 'sendRefunds':
        await sendOpenRefunds();
        return;
      case 'dispute': {
        const { intents, disputes } = this.fake.store.state;
        const disputed = new Set(Object.values(disputes).map(({ payment_intent }) => payment_intent));
        const paid = Object.values(intents).filter(
          ({ id: each, status }) => status === 'succeeded' && !disputed.has(each),
        );
        const intent = paid[place % Math.max(1, paid.length)];
        const left = intent ? intent.amount_received - this.refundedOf(intent.id) : 0;
        if (intent && left > 0)
          openDispute(this.fake.store, this.fake.webhooks, intent.id, amount % 2 ? left : 1 + (amount % left));
        return;
      }
      case 'decideDispute': {
        const open = Object.values(this.fake.store.state.disputes).filter(({ status }) => status === 'needs_response');
        const dispute = open[place % Math.max(1, open.length)];
        if (dispute) decideDispute(this.fake.store, this.fake.webhooks, dispute.id, amount % 2 ? 'won' : 'lost');
        return;
      }
      case 'serviceFails':
        // The SDK asks twice: one failure is healed by it, two are an outage; a hang is an answer that is lost.
        if (place % 2 === 0) this.fake.store.state.switches.failNext = 1 + (amount % 2);
        else this.fake.store.state.switches.hangNext = 1 + (amount % 2);
        return;
      case 'crash':
        return this.#crashIn(step, { name: ownActs[place % ownActs.length]!, place, amount });
    }
  }

  async buyOnePack(): Promise<void> {
    await this.perform('bought', { name: 'openCheckout', place: 0, amount: 1 });
    await this.perform('bought', { name: 'payByCard', place: 0, amount: 4 });
    await this.perform('bought', { name: 'reconcile', place: 0, amount: 1 });
  }

  /** Everything that was lost on the way arrives in the end. */
  async heal(): Promise<void> {
    Object.assign(this.fake.store.state.switches, { failNext: 0, hangNext: 0 });
    await this.#askAboutEverything();
    await sendOpenRefunds();
  }

  /** What the service sent back of a payment, minor units. */
  refundedOf = (intentId: string): number =>
    Object.values(this.fake.store.state.refunds)
      .filter(({ payment_intent }) => payment_intent === intentId)
      .reduce((sum, { amount }) => sum + amount, 0);

  async #askAboutEverything(): Promise<void> {
    for (const topUp of await this.topUps()) await refreshTopUp(topUp.id);
    for (const disputeId of Object.keys(this.fake.store.state.disputes)) await refreshDispute(disputeId);
  }

  topUps = (): Promise<TopUp[]> => TopUp.findAll({ where: { teamId: this.teamId }, order: [['createdAt', 'ASC']] });

  /** Only a page whose address we have given somebody can be paid. */
  async #openSession(place: number): Promise<FakeSession | undefined> {
    const shown = new Set((await this.topUps()).map(({ sessionId }) => sessionId));
    const open = Object.values(this.fake.store.state.sessions).filter(
      ({ id, status }) => status === 'open' && shown.has(id),
    );
    return open[place % Math.max(1, open.length)];
  }

  #payByCard(session: FakeSession, amount: number): void {
    const card = [cards.accepted, cards.accepted, cards.declined, cards.authentication][amount % 4]!;
    const attempt = this.fake.payments.payWithCard(session, card);
    if (attempt === 'authenticate') this.fake.payments.authenticate(session, amount % 8 > 3);
  }

  /** Any event so far, any number of times, in any order: as it was when it was made. */
  async #deliver(amount: number): Promise<void> {
    const { events } = this.fake.store.state;
    const event = events[amount % Math.max(1, events.length)];
    if (!event) return;
    const body = JSON.stringify(event);
    const signature = signer.webhooks.generateTestHeaderString({ payload: body, secret: webhookSecret });
    await receivePaymentEvent({ body, signature });
  }

  /** The process dies after the act's last statement and before its commit. */
  async #crashIn(step: string, act: Act): Promise<void> {
    const dying = inWriteTransaction(async () => {
      await this.perform(step, act);
      throw new Crash();
    });
    await dying.catch((error: unknown) => {
      if (!(error instanceof Crash)) throw error;
    });
  }
}
