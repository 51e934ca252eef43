/** Turns refusals and thrown errors into RFC 9457 problem documents with the request's id: the one mapper. */
import { errorTable, type ProblemDocument } from '@/contracts/errors.ts';
import type { Refusal } from '@/domain/refusals.ts';
import { log } from '../log.ts';

export function problemResponse(refusal: Refusal, requestId: string): Response {
  const { status, title } = errorTable[refusal.code];
  const document: ProblemDocument = {
    type: `/docs/limits#${refusal.code.replaceAll('_', '-')}`,
    title,
    status,
    code: refusal.code,
    detail: refusal.detail,
    requestId,
    ...(refusal.errors ? { errors: refusal.errors } : {}),
  };
  return new Response(JSON.stringify(document), {
    status,
    headers: {
      'Content-Type': 'application/problem+json',
      'Cache-Control': 'no-store',
      ...(refusal.retryAfterSeconds ? { 'Retry-After': String(Math.ceil(refusal.retryAfterSeconds)) } : {}),
    },
  });
}

/** A bug or an outage: logged in full, told to the caller only by its request id. */
export function outageResponse(error: unknown, requestId: string): Response {
  log().error({ err: error }, 'request failed');
  return new Response(
    JSON.stringify({
      type: 'about:blank',
      title: 'Something failed on our side',
      status: 500,
      code: 'internal_error',
      detail:
        'Nothing was changed by this request unless it says otherwise. Try again; if it stays, send us the request id.',
      requestId,
    }),
    { status: 500, headers: { 'Content-Type': 'application/problem+json', 'Cache-Control': 'no-store' } },
  );
}
