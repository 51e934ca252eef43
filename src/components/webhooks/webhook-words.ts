/** What the kinds of events and the states of deliveries are called on screen. */
import type { WebhookKind } from '@/domain/webhooks/webhook-kinds.ts';

export const kindWords: Record<WebhookKind, string> = {
  job_finished: 'A job is done',
  job_stopped_at_cap: 'A job stopped at its cap',
  job_failed: 'A job failed',
  request_made: 'Somebody asks for more credits',
  invoice_issued: 'An invoice is issued',
  balance_low: 'Little is left of the credits',
};

export const deliveryStates = {
  queued: { tone: 'waiting', words: 'Waiting' },
  delivered: { tone: 'done', words: 'Delivered' },
  failed: { tone: 'failed', words: 'Given up' },
} as const;
