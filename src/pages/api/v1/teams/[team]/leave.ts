import { leaveTeam } from '@/contracts/teams.ts';
import { leaveTeam as leave } from '@/server/teams/leave-team.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(leaveTeam, ({ actor, parameters }) => leave({ actor, team: parameters['team'] ?? '' }));
