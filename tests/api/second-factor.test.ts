/** The second factor, end to end through the API, its codes made here by an implementation of our own of RFC 6238. */
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { RecoveryCode, SecondFactor } from '@db/models/second-factor.ts';
import type { User } from '@db/models/people.ts';
import { issueLink } from '@/server/auth/one-time-links.ts';
import { setClock } from '@/server/clock.ts';
import { resetRateLimits } from '@/server/http/rate-limit.ts';
import { makeUser, signedInHeaders, testPassword } from '../factories/people.ts';
import { authenticatorCode } from '../support/authenticator.ts';
import { callEndpoint } from '../support/call-endpoint.ts';
import { useTestDatabase } from '../support/test-database.ts';

useTestDatabase();
const stranger = { Origin: 'http://burette.test' };
let nowMs = Date.parse('2026-12-01T12:00:00Z');
beforeEach(() => {
  resetRateLimits();
  nowMs += 3_600_000;
  setClock(() => nowMs);
});
afterEach(() => setClock(null));

const codeOf = (secret: string, shift = 0): string => authenticatorCode(secret, nowMs, shift);

const post = async (path: string, body: object, headers: Record<string, string>) => {
  const answer = await callEndpoint({ method: 'POST', path: `/api/v1/${path}`, body, headers });
  const text = await answer.text();
  return { status: answer.status, cookie: answer.headers.get('set-cookie'), body: text ? JSON.parse(text) : null };
};

async function turnOn(user: User) {
  const headers = await signedInHeaders(user);
  const begun = await post('account/second-factor', { presentPassword: testPassword }, headers);
  const secret = begun.body.secret as string;
  const confirmed = await post('account/second-factor/confirm', { code: codeOf(secret) }, headers);
  expect([begun.status, confirmed.status]).toEqual([201, 200]);
  nowMs += 30_000;
  return { secret, recoveryCodes: confirmed.body.recoveryCodes as string[], headers };
}
const signIn = (user: User, code?: string, password = testPassword) =>
  post('auth/sign-in', { email: user.email, password, ...(code === undefined ? {} : { code }) }, stranger);

describe('a second factor', () => {
  it('is asked for once a first code has confirmed it, and not before', async () => {
    const user = await makeUser();
    const headers = await signedInHeaders(user);
    expect((await post('account/second-factor', { presentPassword: testPassword }, headers)).status).toBe(201);
    expect((await signIn(user)).status).toBe(200);
    const { secret } = await turnOn(user);
    const without = await signIn(user);
    expect([without.status, without.body.code, without.cookie]).toEqual([401, 'second_factor_needed', null]);
    expect((await signIn(user, codeOf(secret))).status).toBe(200);
  });

  it('does not tell who has one to somebody without the password', async () => {
    const user = await makeUser();
    await turnOn(user);
    expect((await signIn(user, undefined, 'some other words here')).body.code).toBe('wrong_credentials');
  });

  it('takes no code twice, and none from before the last one', async () => {
    const user = await makeUser();
    const { secret } = await turnOn(user);
    const code = codeOf(secret);
    expect((await signIn(user, code)).status).toBe(200);
    expect((await signIn(user, code)).body.code).toBe('wrong_code');
    expect((await signIn(user, codeOf(secret, -1))).body.code).toBe('wrong_code');
    const racing = codeOf(secret, 1);
    const both = await Promise.all([signIn(user, racing), signIn(user, racing)]);
    expect(both.map(({ status }) => status).sort()).toEqual([200, 401]);
  });

  it('can be stood in for by a recovery code, each once, however it is typed', async () => {
    const user = await makeUser();
    const { recoveryCodes } = await turnOn(user);
    expect(new Set(recoveryCodes).size).toBe(10);
    const [first = '', second = ''] = recoveryCodes;
    expect((await signIn(user, first.toUpperCase().replaceAll('-', ' '))).status).toBe(200);
    expect((await signIn(user, first)).body.code).toBe('wrong_code');
    const other = await makeUser();
    await turnOn(other);
    expect((await signIn(other, second)).body.code).toBe('wrong_code');
    expect(await RecoveryCode.count({ where: { userId: user.id, usedAt: null } })).toBe(9);
    expect(JSON.stringify(await RecoveryCode.findAll())).not.toContain(second.replaceAll('-', ''));
  });

  it('slows guesses of codes without shutting out the person by strangers', async () => {
    const user = await makeUser();
    const { secret } = await turnOn(user);
    for (let count = 0; count < 30; count++) await signIn(user, '000000', 'some other words here');
    resetRateLimits();
    const codes = [];
    for (let count = 0; count < 11; count++) codes.push((await signIn(user, 'wrong')).body.code);
    expect(codes).toEqual([...Array<string>(10).fill('wrong_code'), 'rate_limited']);
    expect((await signIn(user, codeOf(secret))).body.code).toBe('rate_limited');
  });

  it('guards the reset by mail: a mailbox alone opens nothing, and the link stays good', async () => {
    const user = await makeUser();
    const { secret } = await turnOn(user);
    const { token } = await issueLink({ purpose: 'reset', email: user.email, userId: user.id, lifetimeMs: 60_000 });
    const reset = (code?: string) =>
      post('auth/reset', { token, password: 'seven quiet herons wade', ...(code ? { code } : {}) }, stranger);
    expect((await reset()).body.code).toBe('second_factor_needed');
    expect((await reset('000000')).body.code).toBe('wrong_code');
    expect((await reset(codeOf(secret))).status).toBe(200);
    nowMs += 30_000;
    expect((await reset(codeOf(secret))).body.code).toBe('link_expired');
  });

  it('needs password and code to be turned off, and the password to be begun', async () => {
    const user = await makeUser();
    const { secret, headers } = await turnOn(user);
    const begin = (presentPassword: string) => post('account/second-factor', { presentPassword }, headers);
    expect((await begin('some other words here')).body.code).toBe('wrong_credentials');
    expect((await begin(testPassword)).body.code).toBe('second_factor_on');
    const remove = (presentPassword: string, code: string) =>
      post('account/second-factor/remove', { presentPassword, code }, headers);
    expect((await remove('some other words here', codeOf(secret))).body.code).toBe('wrong_credentials');
    expect((await remove(testPassword, '000000')).body.code).toBe('wrong_code');
    expect((await remove(testPassword, codeOf(secret))).status).toBe(204);
    expect((await signIn(user)).status).toBe(200);
    expect(await SecondFactor.count({ where: { userId: user.id } })).toBe(0);
  });
});

describe('session fixation', () => {
  it('gains nothing: a session that a browser brings ends, and the one after signing in has another id', async () => {
    const [attacker, victim] = [await makeUser(), await makeUser()];
    const planted = await signedInHeaders(attacker);
    const answer = await post('auth/sign-in', { email: victim.email, password: testPassword }, planted);
    const issued = /burette_session=([^;]+)/.exec(answer.cookie ?? '')?.[1];
    expect(issued).toBeTruthy();
    expect(planted['Cookie']).not.toContain(issued);
    const reading = await callEndpoint({ path: '/api/v1/account', headers: planted });
    expect(reading.status).toBe(401);
    const invented = await post(
      'auth/sign-in',
      { email: victim.email, password: testPassword },
      { ...stranger, Cookie: 'burette_session=chosenbythestranger00000000000000000000' },
    );
    expect(invented.cookie).not.toContain('chosenbythestranger');
  });
});
