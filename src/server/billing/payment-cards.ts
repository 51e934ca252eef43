/** Saving a card on the service's page, what is known of a saved card, charging it without its holder, forgetting it. */
import Stripe from 'stripe';
import type { FetchedCharge } from '@/domain/billing/decide-automatic-top-up.ts';
import type { FetchedSetup } from '@/domain/billing/decide-card-setup.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { callService as call, idOf } from './payment-client.ts';

export interface OpenCardPage {
  setupId: string;
  teamId: string;
  customerId: string;
  successUrl: string;
  cancelUrl: string;
  idempotencyKey: string;
}

/** Opens the page on which a card is saved; the same key opens none twice. */
export async function openCardPage(options: OpenCardPage): Promise<Result<{ sessionId: string; url: string }>> {
  const metadata = { setupId: options.setupId, teamId: options.teamId };
  const opened = await call('checkout.sessions.create', (stripe) =>
    stripe.checkout.sessions.create(
      {
        mode: 'setup',
        customer: options.customerId,
        client_reference_id: options.setupId,
        // Only decides which ways of paying are offered.
        currency: 'eur',
        metadata,
        setup_intent_data: { metadata },
        success_url: options.successUrl,
        cancel_url: options.cancelUrl,
      },
      { idempotencyKey: options.idempotencyKey },
    ),
  );
  if (!opened.ok) return opened;
  const { id, url } = opened.value;
  if (!url) throw new Error(`Checkout ${id} has no address.`);
  return accept({ sessionId: id, url });
}

/** A state that the service may add later counts as not yet decided. */
const pageStates: Record<string, FetchedSetup['status']> = { complete: 'complete', expired: 'expired' };

/** The visit with the card that it saved, as the service has them now. Of a card only what may be shown. */
export async function fetchSetup(sessionId: string): Promise<Result<FetchedSetup>> {
  const fetched = await call('checkout.sessions.retrieve', (stripe) =>
    stripe.checkout.sessions.retrieve(sessionId, { expand: ['setup_intent'] }),
  );
  if (!fetched.ok) return fetched;
  const session = fetched.value;
  const intent = typeof session.setup_intent === 'object' ? session.setup_intent : null;
  const methodId = intent?.status === 'succeeded' ? idOf(intent.payment_method) : null;
  const method = methodId
    ? await call('paymentMethods.retrieve', (stripe) => stripe.paymentMethods.retrieve(methodId))
    : null;
  if (method && !method.ok) return method;
  const card = method?.value.card;
  return accept({
    sessionId: session.id,
    status: pageStates[session.status ?? 'open'] ?? 'open',
    customerId: idOf(session.customer),
    setupId: session.metadata?.['setupId'] ?? null,
    teamId: session.metadata?.['teamId'] ?? null,
    card:
      method && card
        ? {
            paymentMethodId: method.value.id,
            customerId: idOf(method.value.customer),
            brand: card.brand,
            lastFour: card.last4,
            expiryMonth: card.exp_month,
            expiryYear: card.exp_year,
          }
        : null,
  });
}

export interface ChargeCard {
  topUpId: string;
  teamId: string;
  customerId: string;
  paymentMethodId: string;
  description: string;
  totalMinor: number;
  currency: string;
  idempotencyKey: string;
}

/**
 * Charges a saved card without its holder; the same key charges once. Answers the payment's id, whether it passed
 * or not; null when the service does not know the card any more.
 */
export async function chargeCard(options: ChargeCard): Promise<Result<{ paymentIntentId: string | null }>> {
  const { topUpId, teamId, customerId, paymentMethodId, description, totalMinor, currency, idempotencyKey } = options;
  return call('paymentIntents.create', async (stripe) => {
    try {
      const intent = await stripe.paymentIntents.create(
        {
          amount: totalMinor,
          currency: currency.toLowerCase(),
          customer: customerId,
          payment_method: paymentMethodId,
          off_session: true,
          confirm: true,
          description,
          metadata: { topUpId, teamId },
        },
        { idempotencyKey },
      );
      return { paymentIntentId: intent.id };
    } catch (error) {
      // A card that does not pass is an answer: the payment stands in the error.
      const refused = error instanceof Stripe.errors.StripeCardError ? error.payment_intent : undefined;
      if (refused) return { paymentIntentId: refused.id };
      if (error instanceof Stripe.errors.StripeInvalidRequestError) return { paymentIntentId: null };
      throw error;
    }
  });
}

/** A payment by a saved card as the service has it now. */
export async function fetchCharge(paymentIntentId: string): Promise<Result<FetchedCharge>> {
  const fetched = await call('paymentIntents.retrieve', (stripe) => stripe.paymentIntents.retrieve(paymentIntentId));
  return fetched.ok ? accept(chargeOf(fetched.value)) : fetched;
}

/** The payment of a top-up among the customer's latest, for one whose answer never came. Null: the service has none. */
export async function findCharge(options: {
  customerId: string;
  topUpId: string;
}): Promise<Result<FetchedCharge | null>> {
  const { customerId, topUpId } = options;
  const listed = await call('paymentIntents.list', (stripe) =>
    stripe.paymentIntents.list({ customer: customerId, limit: 100 }),
  );
  if (!listed.ok) return listed;
  const found = listed.value.data.find(({ metadata }) => metadata['topUpId'] === topUpId);
  return accept(found ? chargeOf(found) : null);
}

const chargeStates: Record<string, FetchedCharge['status']> = {
  succeeded: 'succeeded',
  processing: 'processing',
  requires_payment_method: 'failed',
  requires_action: 'failed',
  canceled: 'failed',
};

const chargeOf = (intent: Stripe.PaymentIntent): FetchedCharge => ({
  id: intent.id,
  status: chargeStates[intent.status] ?? 'waiting',
  amountMinor: intent.amount,
  receivedMinor: intent.amount_received,
  currency: intent.currency,
  customerId: idOf(intent.customer),
  topUpId: intent.metadata['topUpId'] ?? null,
  teamId: intent.metadata['teamId'] ?? null,
  lastError: intent.last_payment_error?.message ?? null,
  needsHolder: intent.status === 'requires_action' || intent.last_payment_error?.code === 'authentication_required',
});

/** Tells the service to let go of a card. One that it does not have attached any more counts as forgotten. */
export async function forgetCard(options: { paymentMethodId: string; idempotencyKey: string }): Promise<Result<true>> {
  const { paymentMethodId, idempotencyKey } = options;
  return call('paymentMethods.detach', async (stripe) => {
    try {
      await stripe.paymentMethods.detach(paymentMethodId, {}, { idempotencyKey });
    } catch (error) {
      if (!(error instanceof Stripe.errors.StripeInvalidRequestError)) throw error;
    }
    return true as const;
  });
}
