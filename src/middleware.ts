/** Every request: an id and a log of its own, the Origin check, who is asking, rate limit, security headers. No rules of features. */
import type { APIContext, MiddlewareNext } from 'astro';
import { defineMiddleware } from 'astro:middleware';
import { principalName } from '@/domain/teams/actor.ts';
import { authenticateRequest } from '@/server/auth/authenticate-request.ts';
import { env } from '@/server/env.ts';
import { checkOrigin } from '@/server/http/check-origin.ts';
import { outageResponse, problemResponse } from '@/server/http/problem.ts';
import { addressKey, takeAttempt } from '@/server/http/rate-limit.ts';
import { newRequestId } from '@/server/http/request-id.ts';
import { addSecurityHeaders } from '@/server/http/security-headers.ts';
import { log, withRequestLog } from '@/server/log.ts';
import { paths } from '@/paths.ts';

export const onRequest = defineMiddleware(async (context, next) => {
  context.locals.requestId = newRequestId();
  context.locals.actor = { kind: 'anonymous' };
  context.locals.person = null;
  if (context.isPrerendered) return next();
  const started = performance.now();
  return withRequestLog({ requestId: context.locals.requestId }, async () => {
    const response = await answer(context, next);
    addHeaders(context, response);
    log().info(
      {
        method: context.request.method,
        path: context.url.pathname,
        status: response.status,
        ms: Math.round(performance.now() - started),
      },
      'request',
    );
    return response;
  });
});

async function answer(context: APIContext, next: MiddlewareNext): Promise<Response> {
  const { locals, request, url } = context;
  try {
    const authorization = request.headers.get('authorization');
    const origin = checkOrigin({
      method: request.method,
      origin: request.headers.get('origin'),
      bearer: authorization !== null,
      exempt: url.pathname === paths.api('webhooks/stripe'),
      publicUrl: env().PUBLIC_URL,
    });
    if (!origin.ok) return problemResponse(origin, locals.requestId);
    // Health is asked by watchdogs, with nobody's cookie and perhaps with a sick database.
    if (url.pathname === paths.api('health')) return await next();

    const address = context.clientAddress;
    const identity = await authenticateRequest({ authorization, cookies: context.cookies, address });
    if (!identity.ok) return problemResponse(identity, locals.requestId);
    Object.assign(locals, identity.value);
    if (url.pathname.startsWith('/api/')) {
      const principal = locals.actor.kind === 'anonymous' ? addressKey(address) : principalName(locals.actor);
      const call = await takeAttempt('callsByPrincipal', principal);
      if (!call.ok) return problemResponse(call, locals.requestId);
    } else if (!locals.person && /^\/(t|account|operate)(\/|$)/.test(url.pathname)) {
      return context.redirect(`${paths.signIn}?next=${encodeURIComponent(url.pathname + url.search)}`, 303);
    }
    return await next();
  } catch (error) {
    return outageResponse(error, locals.requestId);
  }
}

function addHeaders(context: APIContext, { headers }: Response): void {
  const https = env().PUBLIC_URL.startsWith('https:');
  const isHtml = (headers.get('content-type') ?? '').startsWith('text/html');
  addSecurityHeaders(headers, { https, isHtml });
  headers.set('X-Request-Id', context.locals.requestId);
}
