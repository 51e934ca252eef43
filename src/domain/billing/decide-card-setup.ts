/** What a visit to the service's page for saving a card means. A card is kept only if everything agrees. */

export interface StoredSetup {
  id: string;
  teamId: string;
  customerId: string | null;
  sessionId: string | null;
}

/** Fetched from the service, never taken from an event. */
export interface FetchedSetup {
  sessionId: string;
  status: 'open' | 'complete' | 'expired';
  customerId: string | null;
  setupId: string | null;
  teamId: string | null;
  card: {
    paymentMethodId: string;
    customerId: string | null;
    brand: string;
    lastFour: string;
    expiryMonth: number;
    expiryYear: number;
  } | null;
}

export type SetupDecision =
  | { kind: 'saved'; card: NonNullable<FetchedSetup['card']> }
  /** Also when it ended without a card. */
  | { kind: 'expired' }
  | { kind: 'pending' }
  /** The service's object is not the one that we asked for: nothing is kept, somebody looks. */
  | { kind: 'mismatch'; fields: string[] };

export function decideCardSetup(stored: StoredSetup, fetched: FetchedSetup): SetupDecision {
  const { card } = fetched;
  const differing = (
    [
      ['session', fetched.sessionId === stored.sessionId],
      ['setup', fetched.setupId === stored.id],
      ['team', fetched.teamId === stored.teamId],
      ['customer', stored.customerId !== null && fetched.customerId === stored.customerId],
      ['customer of the card', !card || card.customerId === stored.customerId],
    ] as const
  ).filter(([, agrees]) => !agrees);
  if (differing.length > 0) return { kind: 'mismatch', fields: differing.map(([field]) => field) };
  if (fetched.status === 'complete' && card) return { kind: 'saved', card };
  return fetched.status === 'open' ? { kind: 'pending' } : { kind: 'expired' };
}
