/** Where a request comes from, as far as sessions and rate limits need to know. */
import type { APIContext } from 'astro';

export interface Visitor {
  /** Network address; src/server.ts makes sure that nobody can choose it by a header. */
  address: string;
  userAgent: string | null;
  /** Stored (hashed) id of the session that the request came with, if any. */
  sessionId: string | null;
}

export function visitorOf(context: Pick<APIContext, 'locals' | 'clientAddress' | 'request'>): Visitor {
  const { actor } = context.locals;
  return {
    address: context.clientAddress,
    userAgent: context.request.headers.get('user-agent')?.slice(0, 300) ?? null,
    sessionId: actor.kind === 'user' ? actor.sessionId : null,
  };
}
