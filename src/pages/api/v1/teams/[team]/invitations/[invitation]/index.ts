import { revokeInvitation } from '@/contracts/teams.ts';
import { revokeInvitation as revoke } from '@/server/teams/revoke-invitation.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const DELETE = endpoint(revokeInvitation, ({ actor, parameters }) =>
  revoke({ actor, team: parameters['team'] ?? '', invitation: parameters['invitation'] ?? '' }),
);
