import { beginSecondFactor, readSecondFactor } from '@/contracts/second-factor.ts';
import { beginSecondFactor as begin } from '@/server/auth/begin-second-factor.ts';
import { readSecondFactor as read } from '@/server/auth/read-second-factor.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(readSecondFactor, ({ actor }) => read({ actor }));

export const POST = endpoint(beginSecondFactor, ({ actor, body, context }) =>
  begin({ actor, ...body, visitor: visitorOf(context) }),
);
