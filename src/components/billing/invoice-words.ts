/** States of invoices and pro-formas in words and tones. */
import type { StateTone } from '@/components/ui/StateLabel.tsx';
import type { InvoiceSummary, ProFormaDocument } from '@/contracts/billing.ts';

interface Words {
  tone: StateTone;
  words: string;
}

export const reviewWords: Record<InvoiceSummary['reviewState'], Words> = {
  to_review: { tone: 'waiting', words: 'To review' },
  questioned: { tone: 'caution', words: 'Questioned' },
  approved: { tone: 'done', words: 'Approved' },
};

/** Red only when money is late. */
export function proFormaWords({ state, overdue }: Pick<ProFormaDocument, 'state' | 'overdue'>): Words {
  if (state === 'open') return overdue ? { tone: 'failed', words: 'Overdue' } : { tone: 'working', words: 'Open' };
  const words: Record<Exclude<ProFormaDocument['state'], 'open'>, Words> = {
    paid: { tone: 'done', words: 'Paid' },
    expired: { tone: 'over', words: 'Expired' },
    cancelled: { tone: 'over', words: 'Cancelled' },
  };
  return words[state];
}
