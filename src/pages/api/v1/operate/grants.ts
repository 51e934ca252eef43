import * as contracts from '@/contracts/operate.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { grantGoodwill } from '@/server/operate/grant-goodwill.ts';

export const POST = endpoint(contracts.grantGoodwill, ({ actor, body }) => grantGoodwill({ actor, ...body }));
