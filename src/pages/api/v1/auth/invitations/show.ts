import { showInvitation } from '@/contracts/auth.ts';
import { showInvitation as serve } from '@/server/teams/show-invitation.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(showInvitation, ({ body, context }) => serve({ ...body, visitor: visitorOf(context) }));
