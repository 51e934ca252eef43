/** Every refusal code with its HTTP status and title; problem documents (RFC 9457) are made from this one table. */
import { z } from 'zod';
import type { RefusalCode } from '@/domain/refusals.ts';

export const errorTable: Record<RefusalCode, { status: number; title: string }> = {
  not_signed_in: { status: 401, title: 'Not signed in' },
  not_found: { status: 404, title: 'Not found' },
  forbidden: { status: 403, title: 'Not allowed' },
  invalid_input: { status: 422, title: 'Invalid input' },
  rate_limited: { status: 429, title: 'Too many requests' },
  team_suspended: { status: 403, title: 'Team suspended' },
  wrong_credentials: { status: 401, title: 'Wrong e-mail or password' },
  email_not_verified: { status: 403, title: 'E-mail not verified' },
  link_expired: { status: 410, title: 'Link no longer valid' },
  password_too_weak: { status: 422, title: 'Password too weak' },
  already_a_member: { status: 409, title: 'Already a member' },
  last_owner: { status: 409, title: 'A team needs an owner' },
  limit_reached: { status: 409, title: 'Limit reached' },
  invalid_network: { status: 422, title: 'The model has problems' },
  unreadable_file: { status: 422, title: 'The file cannot be read' },
  too_large: { status: 413, title: 'Too large' },
  version_conflict: { status: 409, title: 'Changed meanwhile' },
  quote_expired: { status: 410, title: 'Quote expired' },
  quote_used: { status: 409, title: 'Quote already used' },
  pilot_failed: { status: 422, title: 'The pilot could not be completed' },
  cap_too_low: { status: 422, title: 'Cap too low' },
  insufficient_credits: { status: 402, title: 'Not enough credits' },
  too_many_jobs: { status: 409, title: 'Too many open jobs' },
  budget_exceeded: { status: 409, title: 'Beyond the budget' },
  project_code_closed: { status: 409, title: 'Project code closed' },
  job_not_running: { status: 409, title: 'The job is not running' },
  job_not_finished: { status: 409, title: 'The job has not finished' },
  results_not_ready: { status: 409, title: 'No results yet' },
  unknown_pack: { status: 422, title: 'Unknown credit pack' },
  payment_service_unavailable: { status: 503, title: 'Payment service unavailable' },
  billing_details_missing: { status: 409, title: 'Billing details missing' },
  bad_signature: { status: 400, title: 'Bad signature' },
  idempotency_key_reused: { status: 409, title: 'Idempotency key used for another request' },
  origin_refused: { status: 403, title: 'Origin refused' },
  unsupported_media_type: { status: 415, title: 'Unsupported media type' },
  range_not_satisfiable: { status: 416, title: 'Range not satisfiable' },
};

export const problemDocument = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  code: z.string(),
  detail: z.string(),
  requestId: z.string(),
  errors: z.array(z.object({ path: z.string(), code: z.string(), message: z.string() })).optional(),
});
export type ProblemDocument = z.infer<typeof problemDocument>;
