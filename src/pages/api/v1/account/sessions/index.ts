import { listSessions } from '@/contracts/auth.ts';
import { listSessions as serve } from '@/server/auth/list-sessions.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listSessions, ({ actor }) => serve({ actor }));
