import { readQuote as contract } from '@/contracts/jobs.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readQuote } from '@/server/jobs/read-quote.ts';

export const GET = endpoint(contract, ({ actor, parameters }) =>
  readQuote({ actor, team: parameters['team']!, quote: parameters['quote']! }),
);
