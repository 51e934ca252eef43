import { confirmSecondFactor } from '@/contracts/second-factor.ts';
import { confirmSecondFactor as confirm } from '@/server/auth/confirm-second-factor.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(confirmSecondFactor, ({ actor, body }) => confirm({ actor, ...body }));
