/** What a ledger transaction did, in one sentence for a person. */
import { creditsText } from '../pricing/credits-text.ts';
import type { Posting, TransactionKind } from './accounts.ts';

/** The positive side of the postings: the amount that moved. */
const moved = (postings: readonly Posting[]): number =>
  postings.reduce((sum, { amountMicrocredits }) => sum + Math.max(0, amountMicrocredits), 0);

export function describeEntry(
  kind: TransactionKind,
  postings: readonly Posting[],
  memo: Record<string, unknown>,
): string {
  const amount = creditsText(moved(postings));
  switch (kind) {
    case 'grant':
      return `${amount} granted: ${String(memo['reason'] ?? 'no reason noted')}`;
    case 'top_up':
      return `${amount} bought`;
    case 'hold':
      return `${amount} held for a job`;
    case 'release':
      return `${amount} released from a job`;
    case 'settlement':
      return `${amount} spent on ${eventsText(memo['events'])}`;
    case 'refund':
      return `${amount} given back and refunded`;
    case 'dispute_opened':
      return `${amount} frozen: a payment is disputed`;
    case 'dispute_won':
      return `${amount} available again: the dispute was won`;
    case 'dispute_lost':
      return `${amount} taken back: the dispute was lost`;
  }
}

function eventsText(events: unknown): string {
  if (typeof events !== 'string' || !/^\d+$/.test(events)) return 'events';
  return events === '1' ? '1 event' : `${BigInt(events).toLocaleString('en')} events`;
}
