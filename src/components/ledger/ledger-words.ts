/** Kinds of ledger entries in words. */
import type { TransactionKind } from '@/domain/ledger/accounts.ts';

export const ledgerKindWords: Record<TransactionKind, string> = {
  grant: 'Grant',
  top_up: 'Top-up',
  hold: 'Hold',
  release: 'Release',
  settlement: 'Charge',
  refund: 'Refund',
  dispute_opened: 'Dispute opened',
  dispute_won: 'Dispute won',
  dispute_lost: 'Dispute lost',
};
