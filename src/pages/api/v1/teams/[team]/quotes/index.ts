import { createQuote as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { createQuote } from '@/server/jobs/create-quote.ts';

export const POST = endpoint(contract, ({ actor, parameters, body, idempotency }) =>
  createQuote({ actor, team: parameters['team']!, request: body, idempotency }),
);
