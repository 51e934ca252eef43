import { changeMember, removeMember } from '@/contracts/teams.ts';
import { changeMember as change } from '@/server/teams/change-member.ts';
import { removeMember as remove } from '@/server/teams/remove-member.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const PATCH = endpoint(changeMember, ({ actor, parameters, body }) =>
  change({ actor, team: parameters['team'] ?? '', member: parameters['member'] ?? '', ...body }),
);

export const DELETE = endpoint(removeMember, ({ actor, parameters }) =>
  remove({ actor, team: parameters['team'] ?? '', member: parameters['member'] ?? '' }),
);
