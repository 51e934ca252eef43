import { inviteMember, listInvitations } from '@/contracts/teams.ts';
import { inviteMember as invite } from '@/server/teams/invite-member.ts';
import { listInvitations as list } from '@/server/teams/list-invitations.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listInvitations, ({ actor, parameters, query }) =>
  list({ actor, team: parameters['team'] ?? '', ...query }),
);

export const POST = endpoint(inviteMember, ({ actor, parameters, body }) =>
  invite({ actor, team: parameters['team'] ?? '', ...body }),
);
