/** What outgoing webhooks tell of. */
export const webhookKinds = [
  'job_finished',
  'job_stopped_at_cap',
  'job_failed',
  'request_made',
  'invoice_issued',
  'balance_low',
] as const;
export type WebhookKind = (typeof webhookKinds)[number];
