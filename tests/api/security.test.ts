/** What every request passes: Origin, headers, bodies, bearer tokens, one-time secrets in logs. */
import { beforeEach, describe, expect, it } from 'vitest';
import { ApiToken } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { env, setEnv } from '@/server/env.ts';
import { addSecurityHeaders } from '@/server/http/security-headers.ts';
import { resetRateLimits } from '@/server/http/rate-limit.ts';
import { bearerHeaders, makeTeam, signedInHeaders, testPassword } from '../factories/people.ts';
import { browser, callEndpoint } from '../support/call-endpoint.ts';
import { useTestDatabase } from '../support/test-database.ts';

useTestDatabase();
beforeEach(resetRateLimits);

const codeOf = async (response: Response) => ((await response.json()) as { code: string }).code;
const rename = { method: 'PATCH', path: '/api/v1/account', body: { name: 'New Name' } };

describe('the Origin of an unsafe request', () => {
  it.each([
    ['absent', {}],
    ['another site', { Origin: 'https://elsewhere.example' }],
    ['null, as from a sandboxed frame', { Origin: 'null' }],
    ['another port', { Origin: 'http://burette.test:8080' }],
    ['another scheme', { Origin: 'https://burette.test' }],
    ['a look-alike', { Origin: 'http://burette.test.elsewhere.example' }],
  ])('is refused when it is %s', async (_, origin) => {
    const { people } = await makeTeam();
    const { Cookie = '' } = await signedInHeaders(people.owner);
    const answer = await callEndpoint({ ...rename, headers: { Cookie, ...origin } });
    expect([answer.status, await codeOf(answer)]).toEqual([403, 'origin_refused']);
  });

  it('is accepted when it is the public URL’s, and not asked of a GET', async () => {
    const { people } = await makeTeam();
    const headers = await signedInHeaders(people.owner);
    expect((await callEndpoint({ ...rename, headers })).status).toBe(200);
    const { Cookie = '' } = headers;
    const reading = { path: '/api/v1/account', headers: { Cookie, Origin: 'https://elsewhere.example' } };
    expect((await callEndpoint(reading)).status).toBe(200);
  });

  it('is not asked of a bearer request, which then cannot use the cookie beside it', async () => {
    const { people, team } = await makeTeam();
    const bearer = await bearerHeaders({ user: people.owner, team });
    const path = `/api/v1/teams/${team.slug}/project-codes`;
    const written = await callEndpoint({ method: 'POST', path, body: { code: 'A-1' }, headers: bearer });
    expect(written.status).toBe(201);
    const { Cookie = '' } = await signedInHeaders(people.owner);
    const mixed = await callEndpoint({ ...rename, headers: { Cookie, Authorization: 'Bearer burette_wrong' } });
    expect([mixed.status, await codeOf(mixed)]).toEqual([401, 'not_signed_in']);
  });
});

describe('a bearer token', () => {
  const read = async (headers: Record<string, string>, slug: string) =>
    callEndpoint({ path: `/api/v1/teams/${slug}`, headers });

  it.each([
    ['Basic b3duZXI6eA=='],
    ['Bearer'],
    ['Bearer '],
    ['Bearer a b'],
    ['burette_x'],
    ['Bearer ' + 'x'.repeat(500)],
  ])('written as “%s” is 401, never anonymous', async (authorization) => {
    const answer = await callEndpoint({ path: '/api/v1/price-book', headers: { Authorization: authorization } });
    expect([answer.status, await codeOf(answer)]).toEqual([401, 'not_signed_in']);
  });

  it('stops at its expiry, at its revocation and at its person’s removal', async () => {
    const { people, team, members } = await makeTeam();
    const owner = browser();
    await owner.post('/api/v1/auth/sign-in', { email: people.owner.email, password: testPassword });
    const expired = await bearerHeaders({
      user: people.owner,
      team,
      expiresAt: new Date(Date.now() - 1).toISOString(),
    });
    expect((await read(expired, team.slug)).status).toBe(401);

    const modeller = browser();
    await modeller.post('/api/v1/auth/sign-in', { email: people.modeller.email, password: testPassword });
    const path = `/api/v1/teams/${team.slug}/tokens`;
    const made = await modeller.post(path, { name: 'script', scopes: ['team:read'] });
    const { token, secret } = (await made.json()) as { token: { id: string }; secret: string };
    const headers = { Authorization: `Bearer ${secret}` };
    expect((await read(headers, team.slug)).status).toBe(200);
    expect((await modeller.call({ method: 'DELETE', path: `${path}/${token.id}` })).status).toBe(204);
    expect((await read(headers, team.slug)).status).toBe(401);

    const second = await bearerHeaders({ user: people.modeller, team });
    const remove = { method: 'DELETE', path: `/api/v1/teams/${team.slug}/members/${members.modeller.id}` };
    expect((await owner.call(remove)).status).toBe(204);
    expect((await read(second, team.slug)).status).toBe(401);
  });

  it('is stored only as a hash and shown only once', async () => {
    const { people, team } = await makeTeam();
    const owner = browser();
    await owner.post('/api/v1/auth/sign-in', { email: people.owner.email, password: testPassword });
    const path = `/api/v1/teams/${team.slug}/tokens`;
    const { secret } = (await (await owner.post(path, { name: 'x', scopes: ['team:read'] })).json()) as {
      secret: string;
    };
    expect(secret).toMatch(/^burette_[\w-]{43}$/);
    const rows = await ApiToken.findAll({ where: { teamId: team.id } });
    expect(JSON.stringify(rows.map((row) => row.toJSON()))).not.toContain(secret);
    expect(await (await owner.call({ path })).text()).not.toContain(secret);
  });

  it('cannot do more than its person may, whatever its scopes say', async () => {
    const { people, team } = await makeTeam();
    const headers = await bearerHeaders({ user: people.viewer, team });
    const path = `/api/v1/teams/${team.slug}/project-codes`;
    const answer = await callEndpoint({ method: 'POST', path, body: { code: 'A-2' }, headers });
    expect([answer.status, await codeOf(answer)]).toEqual([403, 'forbidden']);
  });
});

describe('a body', () => {
  const signIn = { method: 'POST', path: '/api/v1/auth/sign-in', headers: { Origin: 'http://burette.test' } };

  it('beyond the limit is refused, by its declared length and by what really comes', async () => {
    const body = JSON.stringify({ email: 'a@b.example', password: 'x'.repeat(limits.bodyBytes) });
    const headers = { ...signIn.headers, 'Content-Type': 'application/json' };
    expect((await callEndpoint({ ...signIn, headers, body })).status).toBe(413);
    const lying = { ...headers, 'Content-Length': '10' };
    expect((await callEndpoint({ ...signIn, headers: lying, body })).status).toBe(413);
  });

  it.each([
    ['broken JSON', '{"email":', 'application/json', 422],
    ['another media type', 'email=a', 'application/x-www-form-urlencoded', 415],
    ['a list', '[]', 'application/json', 422],
    ['nothing', '', 'application/json', 422],
    [
      'a prototype key',
      '{"__proto__":{"operator":true},"email":"a@b.example","password":"x"}',
      'application/json',
      422,
    ],
  ])('of %s gets a problem document', async (_, body, type, status) => {
    const answer = await callEndpoint({ ...signIn, body, headers: { ...signIn.headers, 'Content-Type': type } });
    expect(answer.status).toBe(status);
    expect(answer.headers.get('Content-Type')).toBe('application/problem+json');
  });
});

describe('headers', () => {
  // Names and values as common practice has them (OWASP secure headers, from memory).
  it('that keep browsers from guessing, framing and leaking are on every answer, refusals too', async () => {
    for (const path of ['/api/v1/health', '/api/v1/account', '/api/v1/nothing-here']) {
      const { headers } = await callEndpoint({ path });
      expect(headers.get('X-Content-Type-Options')).toBe('nosniff');
      expect(headers.get('X-Frame-Options')).toBe('DENY');
      expect(headers.get('Referrer-Policy')).toBe('strict-origin-when-cross-origin');
      expect(headers.get('Content-Security-Policy')).toContain("default-src 'none'");
      expect(headers.get('Cross-Origin-Opener-Policy')).toBe('same-origin');
      expect(headers.get('X-Request-Id')).toMatch(/^req_/);
    }
  });

  it('bind browsers to https only where the site is https', () => {
    const made = (https: boolean) => {
      const headers = new Headers();
      addSecurityHeaders(headers, { https, isHtml: false });
      return headers.get('Strict-Transport-Security');
    };
    expect([made(true), made(false)]).toEqual(['max-age=31536000; includeSubDomains', null]);
  });

  it('mark the session cookie Secure where the site is https', async () => {
    const { people } = await makeTeam();
    const before = env();
    setEnv({ ...before, PUBLIC_URL: 'https://burette.test' });
    const answer = await callEndpoint({
      method: 'POST',
      path: '/api/v1/auth/sign-in',
      headers: { Origin: 'https://burette.test' },
      body: { email: people.owner.email, password: testPassword },
    });
    setEnv(before);
    expect(answer.status).toBe(200);
    expect(answer.headers.getSetCookie()[0]).toContain('Secure');
  });
});

describe('pages', () => {
  it('of a team or of staff send somebody signed out to sign-in, and back afterwards', async () => {
    const answer = await callEndpoint({ path: '/t/tarn-fell/jobs?state=done' });
    expect(answer.status).toBe(303);
    expect(answer.headers.get('Location')).toBe('/sign-in?next=%2Ft%2Ftarn-fell%2Fjobs%3Fstate%3Ddone');
    expect((await callEndpoint({ path: '/operate/prices' })).status).toBe(303);
  });

  it('do not open to a token', async () => {
    const { people, team } = await makeTeam();
    const headers = await bearerHeaders({ user: people.owner, team });
    expect((await callEndpoint({ path: `/t/${team.slug}/overview`, headers })).status).toBe(303);
  });
});
