/** What a checkout, as the payment service has it, means for the top-up that we stored. Credits follow only from `paid`. */

export interface StoredTopUp {
  id: string;
  teamId: string;
  customerId: string | null;
  sessionId: string | null;
  totalMinor: number;
  /** ISO 4217, upper case. */
  currency: string;
}

/** The checkout and its payment, fetched from the service, never taken from an event. */
export interface FetchedCheckout {
  sessionId: string;
  status: 'open' | 'complete' | 'expired';
  paid: boolean;
  totalMinor: number | null;
  currency: string | null;
  customerId: string | null;
  topUpId: string | null;
  teamId: string | null;
  payment: {
    id: string;
    status: 'succeeded' | 'processing' | 'failed' | 'waiting';
    receivedMinor: number;
    currency: string;
    customerId: string | null;
    topUpId: string | null;
    /** The service's words about the last attempt that did not pass. */
    lastError: string | null;
  } | null;
}

export type TopUpDecision =
  | { kind: 'paid'; paymentIntentId: string }
  | { kind: 'processing'; paymentIntentId: string }
  | { kind: 'failed'; problem: string; needsHolder?: boolean }
  | { kind: 'expired' }
  | { kind: 'pending'; problem: string | null }
  /** The service's object is not the one that we asked for: nothing is issued, somebody looks. */
  | { kind: 'mismatch'; fields: string[] };

/** Every fact that must agree does, or it is a mismatch that names what differs. */
export function decideTopUp(stored: StoredTopUp, fetched: FetchedCheckout): TopUpDecision {
  const { payment } = fetched;
  const differing = (
    [
      ['session', fetched.sessionId === stored.sessionId],
      ['top-up', fetched.topUpId === stored.id],
      ['team', fetched.teamId === stored.teamId],
      ['customer', stored.customerId !== null && fetched.customerId === stored.customerId],
      ['amount', fetched.totalMinor === stored.totalMinor],
      ['currency', fetched.currency?.toUpperCase() === stored.currency],
      ['top-up of the payment', !payment || payment.topUpId === stored.id],
      ['customer of the payment', !payment || payment.customerId === stored.customerId],
      ['currency of the payment', !payment || payment.currency.toUpperCase() === stored.currency],
      ['amount of the payment', payment?.status !== 'succeeded' || payment.receivedMinor === stored.totalMinor],
    ] as const
  ).filter(([, agrees]) => !agrees);
  if (differing.length > 0) return { kind: 'mismatch', fields: differing.map(([field]) => field) };
  if (fetched.status === 'complete' && fetched.paid && payment?.status === 'succeeded')
    return { kind: 'paid', paymentIntentId: payment.id };
  if (fetched.status === 'complete' && payment?.status === 'processing')
    return { kind: 'processing', paymentIntentId: payment.id };
  if (fetched.status === 'complete' && payment && payment.status !== 'succeeded')
    return { kind: 'failed', problem: payment.lastError ?? 'The payment did not arrive.' };
  if (fetched.status === 'expired') return { kind: 'expired' };
  return { kind: 'pending', problem: payment?.lastError ?? null };
}
