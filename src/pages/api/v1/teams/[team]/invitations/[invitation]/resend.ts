import { resendInvitation } from '@/contracts/teams.ts';
import { resendInvitation as resend } from '@/server/teams/resend-invitation.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(resendInvitation, ({ actor, parameters }) =>
  resend({ actor, team: parameters['team'] ?? '', invitation: parameters['invitation'] ?? '' }),
);
