import { createProjectCode, listProjectCodes } from '@/contracts/teams.ts';
import { createProjectCode as create } from '@/server/teams/create-project-code.ts';
import { listProjectCodes as list } from '@/server/teams/list-project-codes.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listProjectCodes, ({ actor, parameters, query }) =>
  list({ actor, team: parameters['team'] ?? '', ...query }),
);

export const POST = endpoint(createProjectCode, ({ actor, parameters, body }) =>
  create({ actor, team: parameters['team'] ?? '', ...body }),
);
