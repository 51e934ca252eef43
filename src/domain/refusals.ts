/** Expected refusals: a closed union of codes, and the shape in which every decision and service answers. */

/** Every expected refusal of the system. `contracts/errors.ts` gives each its HTTP status and title. */
export const refusalCodes = [
  'not_signed_in',
  'not_found',
  'forbidden',
  'invalid_input',
  'rate_limited',
  'team_suspended',
  // people
  'wrong_credentials',
  'second_factor_needed',
  'wrong_code',
  'second_factor_on',
  'second_factor_off',
  'email_not_verified',
  'link_expired',
  'password_too_weak',
  'already_a_member',
  'last_owner',
  'limit_reached',
  // models
  'invalid_network',
  'unreadable_file',
  'too_large',
  'version_conflict',
  // quotes and jobs
  'quote_expired',
  'quote_used',
  'pilot_failed',
  'cap_too_low',
  'insufficient_credits',
  'too_many_jobs',
  'project_code_closed',
  'budget_exceeded',
  'job_not_running',
  'job_not_finished',
  'results_not_ready',
  // money
  'unknown_pack',
  'payment_service_unavailable',
  'billing_details_missing',
  'card_missing',
  'payment_owed',
  'bad_signature',
  // requests in general
  'idempotency_key_reused',
  'origin_refused',
  'unsupported_media_type',
  'range_not_satisfiable',
] as const;
export type RefusalCode = (typeof refusalCodes)[number];

/** One fault of the input, located. */
export interface InputFault {
  path: string;
  code: string;
  message: string;
}

export interface Refusal {
  ok: false;
  code: RefusalCode;
  /** One or two sentences for a person: what happened, what was kept, what to do next. */
  detail: string;
  errors?: InputFault[];
  /** Seconds after which trying again makes sense, for `rate_limited`. */
  retryAfterSeconds?: number;
}
export type Result<T> = { ok: true; value: T } | Refusal;

export const accept = <T>(value: T): Result<T> => ({ ok: true, value });
export const refuse = (
  code: RefusalCode,
  detail: string,
  more: Pick<Refusal, 'errors' | 'retryAfterSeconds'> = {},
): Refusal => ({ ok: false, code, detail, ...more });
