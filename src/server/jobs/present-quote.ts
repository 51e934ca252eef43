/** How a stored quote looks in answers. */
import type { Quote } from '@db/models/jobs.ts';
import type { QuoteDocument } from '@/contracts/jobs.ts';

export const presentQuote = (quote: Quote): QuoteDocument => ({
  ...(quote.answer as Omit<QuoteDocument, 'id' | 'expiresAt' | 'usedByJobId'>),
  id: quote.id,
  expiresAt: quote.expiresAt,
  usedByJobId: quote.usedByJobId ?? null,
});
