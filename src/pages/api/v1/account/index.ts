import { changeAccount, readAccount } from '@/contracts/auth.ts';
import { changeAccount as change } from '@/server/auth/change-account.ts';
import { readAccount as read } from '@/server/auth/read-account.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(readAccount, ({ actor }) => read({ actor }));

export const PATCH = endpoint(changeAccount, ({ actor, body }) => change({ actor, ...body }));
