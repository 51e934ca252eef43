/** Customers, hosted checkouts, refunds and signed events of the payment service. */
import type { FetchedCheckout } from '@/domain/billing/decide-top-up.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { env } from '../env.ts';
import { log } from '../log.ts';
import { callService as call, idOf, paymentClient } from './payment-client.ts';

/** What the local fake signs with when nothing else is configured. It guards nothing: no money moves there. */
export const practiceWebhookSecret = 'whsec_local_practice';

export async function createCustomer(options: {
  teamId: string;
  name: string;
  idempotencyKey: string;
}): Promise<Result<string>> {
  const { teamId, name, idempotencyKey } = options;
  const made = await call('customers.create', (stripe) =>
    stripe.customers.create({ name, metadata: { teamId } }, { idempotencyKey }),
  );
  return made.ok ? accept(made.value.id) : made;
}

export interface OpenCheckout {
  topUpId: string;
  teamId: string;
  customerId: string;
  description: string;
  totalMinor: number;
  currency: string;
  successUrl: string;
  cancelUrl: string;
  /** RFC 3339. */
  expiresAt: string;
  idempotencyKey: string;
}

/** Opens a hosted checkout; the same key opens none twice. */
export async function openCheckout(options: OpenCheckout): Promise<Result<{ sessionId: string; url: string }>> {
  const metadata = { topUpId: options.topUpId, teamId: options.teamId };
  const opened = await call('checkout.sessions.create', (stripe) =>
    stripe.checkout.sessions.create(
      {
        mode: 'payment',
        customer: options.customerId,
        client_reference_id: options.topUpId,
        metadata,
        payment_intent_data: { metadata, description: options.description },
        line_items: [
          {
            quantity: 1,
            price_data: {
              currency: options.currency.toLowerCase(),
              unit_amount: options.totalMinor,
              product_data: { name: options.description },
            },
          },
        ],
        success_url: options.successUrl,
        cancel_url: options.cancelUrl,
        expires_at: Math.floor(Date.parse(options.expiresAt) / 1000),
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
const checkoutStates: Record<string, FetchedCheckout['status']> = { complete: 'complete', expired: 'expired' };
const paymentStates: Record<string, NonNullable<FetchedCheckout['payment']>['status']> = {
  succeeded: 'succeeded',
  processing: 'processing',
  canceled: 'failed',
};

/** The checkout with its payment as the service has them now. */
export async function fetchCheckout(sessionId: string): Promise<Result<FetchedCheckout>> {
  const fetched = await call('checkout.sessions.retrieve', (stripe) =>
    stripe.checkout.sessions.retrieve(sessionId, { expand: ['payment_intent'] }),
  );
  if (!fetched.ok) return fetched;
  const session = fetched.value;
  const intent = typeof session.payment_intent === 'object' ? session.payment_intent : null;
  return accept({
    sessionId: session.id,
    status: checkoutStates[session.status ?? 'open'] ?? 'open',
    paid: session.payment_status === 'paid',
    totalMinor: session.amount_total,
    currency: session.currency,
    customerId: idOf(session.customer),
    topUpId: session.metadata?.['topUpId'] ?? null,
    teamId: session.metadata?.['teamId'] ?? null,
    payment: intent && {
      id: intent.id,
      status: paymentStates[intent.status] ?? 'waiting',
      receivedMinor: intent.amount_received,
      currency: intent.currency,
      customerId: idOf(intent.customer),
      topUpId: intent.metadata['topUpId'] ?? null,
      lastError: intent.last_payment_error?.message ?? null,
    },
  });
}

/** Gives money of a payment back; the same key gives it once. `failed`: the bank would not take it. */
export async function createRefund(options: {
  returnId: string;
  paymentIntentId: string;
  totalMinor: number;
  idempotencyKey: string;
}): Promise<Result<{ refundId: string; failed: boolean }>> {
  const { returnId, paymentIntentId, totalMinor, idempotencyKey } = options;
  const made = await call('refunds.create', (stripe) =>
    stripe.refunds.create(
      { payment_intent: paymentIntentId, amount: totalMinor, metadata: { returnId } },
      { idempotencyKey },
    ),
  );
  if (!made.ok) return made;
  const { id, status } = made.value;
  return accept({ refundId: id, failed: status === 'failed' || status === 'canceled' });
}

export interface ReceivedEvent {
  id: string;
  type: string;
  objectId: string | null;
  sessionId: string | null;
  topUpId: string | null;
  disputeId: string | null;
}

/**
 * Checks an event's signature and age (five minutes), and takes from it only what tells where to look. Refuses with
 * `bad_signature`, whatever is wrong with it.
 */
export function readEvent(body: string, signature: string | null): Result<ReceivedEvent> {
  const bad = refuse('bad_signature', 'This is not an event that the payment service signed in the last five minutes.');
  const { STRIPE_SECRET_KEY, STRIPE_WEBHOOK_SECRET } = env();
  const secret = STRIPE_WEBHOOK_SECRET ?? (STRIPE_SECRET_KEY ? undefined : practiceWebhookSecret);
  const stripe = paymentClient();
  if (!secret || !stripe || !signature) return bad;
  try {
    const event = stripe.webhooks.constructEvent(body, signature, secret);
    const object = event.data.object as { id?: unknown; object?: unknown; metadata?: Record<string, unknown> | null };
    const text = (value: unknown) => (typeof value === 'string' ? value : null);
    if (!text(event.id) || !text(event.type)) return bad;
    return accept({
      id: event.id,
      type: event.type,
      objectId: text(object.id),
      sessionId: object.object === 'checkout.session' ? text(object.id) : null,
      topUpId: text(object.metadata?.['topUpId']),
      disputeId: object.object === 'dispute' ? text(object.id) : null,
    });
  } catch (error) {
    log().warn({ err: error }, 'refused a payment event');
    return bad;
  }
}
