/** States of disputes, receivables and returns in words and tones. */
import type { StateTone } from '@/components/ui/StateLabel.tsx';
import type { DisputeDocument, ReceivableDocument, Refundable } from '@/contracts/billing.ts';

interface Words {
  tone: StateTone;
  words: string;
}

export const disputeWords: Record<DisputeDocument['state'], Words> = {
  open: { tone: 'caution', words: 'Open' },
  won: { tone: 'done', words: 'Won' },
  lost: { tone: 'failed', words: 'Lost' },
};

export const receivableWords: Record<ReceivableDocument['state'], Words> = {
  open: { tone: 'failed', words: 'Owed' },
  settled: { tone: 'done', words: 'Settled' },
  written_off: { tone: 'over', words: 'Written off' },
};

export const returnWords: Record<Refundable['returns'][number]['state'], Words> = {
  pending: { tone: 'working', words: 'Being sent' },
  sent: { tone: 'done', words: 'Sent back' },
  failed: { tone: 'failed', words: 'Not sent' },
  by_transfer: { tone: 'waiting', words: 'To pay by transfer' },
  taken: { tone: 'over', words: 'Taken by the bank' },
};
