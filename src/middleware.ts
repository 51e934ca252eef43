/** Every request: an id and a log of its own, the Origin check, who is asking, security headers. No rules of features. */
import { defineMiddleware } from 'astro:middleware';
import { authenticateRequest } from '@/server/auth/authenticate-request.ts';
import { env } from '@/server/env.ts';
import { checkOrigin } from '@/server/http/check-origin.ts';
import { outageResponse, problemResponse } from '@/server/http/problem.ts';
import { addSecurityHeaders } from '@/server/http/security-headers.ts';
import { log, withRequestLog } from '@/server/log.ts';
import { newRequestId } from '@/server/http/request-id.ts';

export const onRequest = defineMiddleware(async (context, next) => {
  const { method } = context.request;
  const { pathname } = context.url;
  const requestId = newRequestId();
  context.locals.requestId = requestId;
  const started = performance.now();
  return withRequestLog({ requestId }, async () => {
    const response = await answer();
    const https = env().PUBLIC_URL.startsWith('https:');
    const isHtml = (response.headers.get('content-type') ?? '').startsWith('text/html');
    addSecurityHeaders(response.headers, { https, isHtml });
    response.headers.set('X-Request-Id', requestId);
    log().info(
      { method, path: pathname, status: response.status, ms: Math.round(performance.now() - started) },
      'request',
    );
    return response;
  });

  async function answer(): Promise<Response> {
    try {
      const authorization = context.request.headers.get('authorization');
      const origin = checkOrigin({
        method,
        origin: context.request.headers.get('origin'),
        bearer: authorization !== null,
        exempt: pathname === '/api/v1/webhooks/stripe',
        publicUrl: env().PUBLIC_URL,
      });
      if (!origin.ok) return problemResponse(origin, requestId);
      const identity = await authenticateRequest({ authorization, cookies: context.cookies });
      if (!identity.ok) return problemResponse(identity, requestId);
      context.locals.actor = identity.value.actor;
      context.locals.person = identity.value.person;
      return await next();
    } catch (error) {
      return outageResponse(error, requestId);
    }
  }
});
