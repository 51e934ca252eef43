import { signUp } from '@/contracts/auth.ts';
import { signUp as serve } from '@/server/auth/sign-up.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(signUp, ({ body, context }) => serve({ ...body, visitor: visitorOf(context) }));
