import { requestReset } from '@/contracts/auth.ts';
import { requestReset as serve } from '@/server/auth/request-reset.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(requestReset, ({ body, context }) => serve({ ...body, visitor: visitorOf(context) }));
