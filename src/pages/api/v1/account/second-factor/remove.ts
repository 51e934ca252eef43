import { removeSecondFactor } from '@/contracts/second-factor.ts';
import { removeSecondFactor as remove } from '@/server/auth/remove-second-factor.ts';
import { visitorOf } from '@/server/auth/visitor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(removeSecondFactor, ({ actor, body, context }) =>
  remove({ actor, ...body, visitor: visitorOf(context) }),
);
