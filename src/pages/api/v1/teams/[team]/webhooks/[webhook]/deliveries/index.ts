import { listDeliveries } from '@/contracts/webhooks.ts';
import { listDeliveries as list } from '@/server/webhooks/list-deliveries.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listDeliveries, ({ actor, parameters, query }) =>
  list({ actor, team: parameters['team'] ?? '', webhook: parameters['webhook'] ?? '', ...query }),
);
