/** Health and the API's own description. */
import { z } from 'zod';
import { contract } from './contract.ts';

export const health = contract({
  id: 'health',
  feature: 'system',
  method: 'GET',
  path: '/api/v1/health',
  summary: 'Whether the service can take work',
  access: { kind: 'public' },
  answers: [
    {
      status: 200,
      description: 'Serving',
      schema: z.object({
        status: z.literal('ok'),
        engineVersion: z.string(),
        database: z.literal('ok'),
        workers: z.number().int(),
        /** `unknown` until it was verified since the start. */
        ledger: z.enum(['whole', 'broken', 'unknown']),
      }),
    },
  ],
  refusals: [],
});

export const openApi = contract({
  id: 'openApi',
  feature: 'system',
  method: 'GET',
  path: '/api/openapi.json',
  summary: 'This description',
  access: { kind: 'public' },
  answers: [{ status: 200, description: 'OpenAPI 3.1 document', schema: z.looseObject({ openapi: z.string() }) }],
  refusals: [],
});

export const systemContracts = [health, openApi];
