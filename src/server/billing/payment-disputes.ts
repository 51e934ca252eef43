/** Disputes as the payment service has them. */
import { accept, type Result } from '@/domain/refusals.ts';
import { callService as call, idOf } from './payment-client.ts';

export interface FetchedDispute {
  id: string;
  /** A state that the service may add later counts as not decided. */
  state: 'open' | 'won' | 'lost';
  /** What the bank takes, tax included. */
  totalMinor: number;
  /** Lower case. */
  currency: string;
  /** In the service's words, such as `fraudulent`. */
  reason: string;
  paymentIntentId: string | null;
  topUpId: string | null;
}

export async function fetchDispute(disputeId: string): Promise<Result<FetchedDispute>> {
  const fetched = await call('disputes.retrieve', (stripe) =>
    stripe.disputes.retrieve(disputeId, { expand: ['payment_intent'] }),
  );
  if (!fetched.ok) return fetched;
  const { id, status, amount, currency, reason, payment_intent: intent } = fetched.value;
  return accept({
    id,
    // An inquiry that is closed took no money: as good as won.
    state: status === 'won' || status === 'warning_closed' ? 'won' : status === 'lost' ? 'lost' : 'open',
    totalMinor: amount,
    currency,
    reason,
    paymentIntentId: idOf(intent),
    topUpId: intent && typeof intent === 'object' ? (intent.metadata['topUpId'] ?? null) : null,
  });
}

/** Ids of the disputes opened since a moment, newest first, a hundred at most. `since` is RFC 3339. */
export async function listDisputeIds(since: string): Promise<Result<string[]>> {
  const listed = await call('disputes.list', (stripe) =>
    stripe.disputes.list({ created: { gte: Math.floor(Date.parse(since) / 1000) }, limit: 100 }),
  );
  return listed.ok ? accept(listed.value.data.map(({ id }) => id)) : listed;
}
