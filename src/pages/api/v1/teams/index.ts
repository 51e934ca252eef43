import { listTeams } from '@/contracts/teams.ts';
import { listTeams as list } from '@/server/teams/list-teams.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listTeams, ({ actor }) => list({ actor }));
