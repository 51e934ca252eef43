import { createToken, listTokens } from '@/contracts/teams.ts';
import { createToken as create } from '@/server/teams/create-token.ts';
import { listTokens as list } from '@/server/teams/list-tokens.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listTokens, ({ actor, parameters, query }) =>
  list({ actor, team: parameters['team'] ?? '', ...query }),
);

export const POST = endpoint(createToken, ({ actor, parameters, body }) =>
  create({ actor, team: parameters['team'] ?? '', ...body }),
);
