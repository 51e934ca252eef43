import { endSession } from '@/contracts/auth.ts';
import { endSession as serve } from '@/server/auth/end-session.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const DELETE = endpoint(endSession, ({ actor, parameters }) =>
  serve({ actor, session: parameters['session'] ?? '' }),
);
