/**
 * Sends a request through the real middleware and the real endpoint file, as the server would, without a socket.
 * `browser()` keeps cookies between calls.
 */
import { createContext } from 'astro/middleware';
import type { APIContext, APIRoute } from 'astro';
import { onRequest } from '@/middleware.ts';

type Module = Partial<Record<string, APIRoute>>;
const modules = import.meta.glob<Module>('../../src/pages/api/**/*.ts');

interface Route {
  matcher: RegExp;
  names: string[];
  load: () => Promise<Module>;
}

const routes: Route[] = Object.entries(modules)
  .map(([file, load]) => {
    const url = file
      .replace('../../src/pages', '')
      .replace(/\.ts$/, '')
      .replace(/\/index$/, '');
    const names = [...url.matchAll(/\[(\w+)\]/g)].map(([, name]) => name!);
    const pattern = url.replaceAll('.', '\\.').replaceAll(/\[\w+\]/g, '([^/]+)');
    return { matcher: new RegExp(`^${pattern}$`), names, load };
  })
  // As the framework does: a literal path goes before one with parameters.
  .sort((a, b) => a.names.length - b.names.length);

export interface Call {
  method?: string;
  /** `/api/v1/…?query` */
  path: string;
  headers?: Record<string, string>;
  /** Text goes as it is, anything else as JSON. */
  body?: unknown;
  /** The caller's network address. */
  address?: string;
}

export async function callEndpoint(call: Call): Promise<Response> {
  const { method = 'GET', path, headers = {}, body, address = '192.0.2.1' } = call;
  const isJson = body !== undefined && typeof body !== 'string';
  const request = new Request(`http://burette.test${path}`, {
    method,
    headers: {
      'X-Forwarded-For': address,
      ...(isJson ? { 'Content-Type': 'application/json' } : {}),
      ...headers,
    },
    ...(body === undefined ? {} : { body: isJson ? JSON.stringify(body) : (body as string) }),
  });
  const { pathname } = new URL(request.url);
  const route = routes.find(({ matcher }) => matcher.test(pathname));
  const values = route?.matcher.exec(pathname)?.slice(1) ?? [];
  const params = Object.fromEntries(values.map((value, index) => [route!.names[index], decodeURIComponent(value)]));
  const context = createContext({ request, params, locals: {} as App.Locals, defaultLocale: 'en' }) as APIContext;
  const response = await onRequest(context, async () => {
    const handler = (await route?.load())?.[method];
    return handler ? handler(context) : new Response(null, { status: 404 });
  });
  if (!(response instanceof Response)) throw new Error('The middleware answered nothing.');
  for (const cookie of context.cookies.headers()) response.headers.append('Set-Cookie', cookie);
  return response;
}

/** A browser on the site: sends its Origin and keeps the cookies it is given. */
export function browser(options: { origin?: string; address?: string } = {}) {
  const { origin = 'http://burette.test', ...rest } = options;
  const jar = new Map<string, string>();
  return {
    jar,
    async call(call: Call): Promise<Response> {
      const cookies = [...jar].map(([name, value]) => `${name}=${value}`).join('; ');
      const headers = { Origin: origin, ...(cookies ? { Cookie: cookies } : {}), ...call.headers };
      const response = await callEndpoint({ ...rest, ...call, headers });
      for (const cookie of response.headers.getSetCookie()) {
        const [, name, value] = /^([^=]+)=([^;]*)/.exec(cookie) ?? [];
        if (/Max-Age=0(;|$)|Expires=Thu, 01 Jan 1970/i.test(cookie) || value === '') jar.delete(name!);
        else jar.set(name!, value!);
      }
      return response;
    },
    post(path: string, body: unknown): Promise<Response> {
      return this.call({ method: 'POST', path, body });
    },
  };
}
export type Browser = ReturnType<typeof browser>;
