/** Automatic top-ups: whether one is to begin, and what the payment of one means. */

export interface AutomaticFacts {
  availableMicrocredits: number;
  thresholdMicrocredits: number;
  /** Of a top-up now, tax included. */
  totalMinor: number;
  /** Automatic top-ups of this month that passed or are on their way, tax included. */
  spentThisMonthMinor: number;
  monthlyCeilingMinor: number;
}

export type AutomaticDecision = { kind: 'enough' } | { kind: 'begin' } | { kind: 'ceiling' };

/** Begins one when less than the threshold is available and the month's ceiling leaves room for a whole pack. */
export function decideAutomaticTopUp(facts: AutomaticFacts): AutomaticDecision {
  if (facts.availableMicrocredits >= facts.thresholdMicrocredits) return { kind: 'enough' };
  return facts.spentThisMonthMinor + facts.totalMinor > facts.monthlyCeilingMinor
    ? { kind: 'ceiling' }
    : { kind: 'begin' };
}

export interface StoredCharge {
  id: string;
  teamId: string;
  customerId: string | null;
  totalMinor: number;
  /** ISO 4217, upper case. */
  currency: string;
}

/** A payment by a saved card, fetched from the service, never taken from an event. */
export interface FetchedCharge {
  id: string;
  status: 'succeeded' | 'processing' | 'failed' | 'waiting';
  amountMinor: number;
  receivedMinor: number;
  currency: string;
  customerId: string | null;
  topUpId: string | null;
  teamId: string | null;
  /** The service's words. */
  lastError: string | null;
  /** The bank wants the card's holder to confirm. */
  needsHolder: boolean;
}

export type ChargeDecision =
  | { kind: 'paid'; paymentIntentId: string }
  | { kind: 'processing'; paymentIntentId: string }
  | { kind: 'failed'; problem: string; needsHolder: boolean }
  | { kind: 'pending'; problem: null }
  | { kind: 'mismatch'; fields: string[] };

/** Every fact that must agree does, or it is a mismatch that names what differs. */
export function decideCharge(stored: StoredCharge, fetched: FetchedCharge): ChargeDecision {
  const differing = (
    [
      ['top-up', fetched.topUpId === stored.id],
      ['team', fetched.teamId === stored.teamId],
      ['customer', stored.customerId !== null && fetched.customerId === stored.customerId],
      ['amount', fetched.amountMinor === stored.totalMinor],
      ['currency', fetched.currency.toUpperCase() === stored.currency],
      ['amount received', fetched.status !== 'succeeded' || fetched.receivedMinor === stored.totalMinor],
    ] as const
  ).filter(([, agrees]) => !agrees);
  if (differing.length > 0) return { kind: 'mismatch', fields: differing.map(([field]) => field) };
  switch (fetched.status) {
    case 'succeeded':
      return { kind: 'paid', paymentIntentId: fetched.id };
    case 'processing':
      return { kind: 'processing', paymentIntentId: fetched.id };
    case 'failed':
      return {
        kind: 'failed',
        problem: fetched.lastError ?? 'The payment did not pass.',
        needsHolder: fetched.needsHolder,
      };
    case 'waiting':
      return { kind: 'pending', problem: null };
  }
}
