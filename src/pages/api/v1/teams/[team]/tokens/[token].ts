import { revokeToken } from '@/contracts/teams.ts';
import { revokeToken as revoke } from '@/server/teams/revoke-token.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const DELETE = endpoint(revokeToken, ({ actor, parameters }) =>
  revoke({ actor, team: parameters['team'] ?? '', token: parameters['token'] ?? '' }),
);
