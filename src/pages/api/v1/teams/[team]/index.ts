import { changeTeam, readTeam } from '@/contracts/teams.ts';
import { changeTeam as change } from '@/server/teams/change-team.ts';
import { readTeam as read } from '@/server/teams/read-team.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(readTeam, ({ actor, parameters }) => read({ actor, team: parameters['team'] ?? '' }));

export const PATCH = endpoint(changeTeam, ({ actor, parameters, body }) =>
  change({ actor, team: parameters['team'] ?? '', ...body }),
);
