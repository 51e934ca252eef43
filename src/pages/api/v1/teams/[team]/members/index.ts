import { listMembers } from '@/contracts/teams.ts';
import { listMembers as list } from '@/server/teams/list-members.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listMembers, ({ actor, parameters, query }) =>
  list({ actor, team: parameters['team'] ?? '', ...query }),
);
