/** Accounts through the real endpoints: sign-up to sign-out, and what strangers try. */
import { beforeEach, describe, expect, it } from 'vitest';
import { OneTimeLink, Session, User } from '@db/models/people.ts';
import { Mail } from '@db/models/teams.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { setClock } from '@/server/clock.ts';
import { resetRateLimits } from '@/server/http/rate-limit.ts';
import { makeTeam, makeUser, storedSessionId, testPassword } from '../factories/people.ts';
import { browser, callEndpoint, type Browser } from '../support/call-endpoint.ts';
import { mailsTo, tokenInMailTo } from '../support/mailbox.ts';
import { useTestDatabase } from '../support/test-database.ts';

useTestDatabase();
beforeEach(() => {
  resetRateLimits();
  setClock(null);
});

const password = 'seven quiet herons wade';
const wish = (email: string) => ({ email, name: 'Ada Moor', password, teamName: 'Moor Kinetics' });
const auth = (act: string) => `/api/v1/auth/${act}`;
const codeOf = async (response: Response) => ((await response.json()) as { code: string }).code;

async function signedUp(email: string): Promise<Browser> {
  const person = browser();
  await person.post(auth('sign-up'), wish(email));
  const token = await tokenInMailTo(email);
  expect((await person.post(auth('verify'), { token, password })).status).toBe(200);
  return person;
}

describe('sign-up', () => {
  it('opens account, team, welcome grant and session once the mailed link and the password come together', async () => {
    const person = browser();
    const asked = await person.post(auth('sign-up'), wish('Ada@Moor.example '));
    expect(asked.status).toBe(202);
    expect(await User.count({ where: { email: 'ada@moor.example' } })).toBe(0);

    const token = await tokenInMailTo('ada@moor.example');
    const verified = await person.post(auth('verify'), { token, password });
    const { team, person: shown } = (await verified.json()) as { team: { slug: string }; person: { email: string } };
    expect([verified.status, team.slug, shown.email]).toEqual([200, 'moor-kinetics', 'ada@moor.example']);

    const account = await person.call({ path: '/api/v1/account' });
    expect(await account.json()).toMatchObject({ teams: [{ slug: 'moor-kinetics', roles: ['owner'] }] });
    const read = await person.call({ path: '/api/v1/teams/moor-kinetics' });
    const { team: whole } = (await read.json()) as { team: { id: string } };
    expect((await readBalance(whole.id)).available).toBe(10_000_000);
  });

  it('does not use a link up by a wrong password, and not at all by a GET', async () => {
    const person = browser();
    await person.post(auth('sign-up'), wish('scanner@moor.example'));
    const token = await tokenInMailTo('scanner@moor.example');
    expect((await person.call({ path: `${auth('verify')}?token=${token}` })).status).toBe(404);
    const wrong = await person.post(auth('verify'), { token, password: 'another heron entirely' });
    expect([wrong.status, await codeOf(wrong)]).toEqual([401, 'wrong_credentials']);
    expect((await person.post(auth('verify'), { token, password })).status).toBe(200);
  });

  it('refuses a link the second time', async () => {
    const person = browser();
    await person.post(auth('sign-up'), wish('replay@moor.example'));
    const token = await tokenInMailTo('replay@moor.example');
    await person.post(auth('verify'), { token, password });
    const again = await browser().post(auth('verify'), { token, password });
    expect([again.status, await codeOf(again)]).toEqual([410, 'link_expired']);
  });

  it('lets one of two simultaneous uses of a link through', async () => {
    await browser().post(auth('sign-up'), wish('race@moor.example'));
    const token = await tokenInMailTo('race@moor.example');
    const answers = await Promise.all([1, 2].map(() => browser().post(auth('verify'), { token, password })));
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 410]);
    expect(await User.count({ where: { email: 'race@moor.example' } })).toBe(1);
  });

  it('refuses a link after a day', async () => {
    await browser().post(auth('sign-up'), wish('late@moor.example'));
    const token = await tokenInMailTo('late@moor.example');
    setClock(() => Date.now() + 25 * 60 * 60 * 1000);
    expect((await browser().post(auth('verify'), { token, password })).status).toBe(410);
  });

  it('answers a known address exactly as an unknown one, and tells only its owner', async () => {
    await makeUser({ email: 'known@moor.example' });
    const known = await browser().post(auth('sign-up'), wish('known@moor.example'));
    const unknown = await browser().post(auth('sign-up'), wish('fresh@moor.example'));
    expect(known.status).toBe(unknown.status);
    expect((await known.text()).replace('known@', 'x@')).toBe((await unknown.text()).replace('fresh@', 'x@'));
    const names = (response: Response) => [...response.headers.keys()].sort();
    expect(names(known)).toEqual(names(unknown));
    const [mail] = await mailsTo('known@moor.example');
    expect(mail?.subject).toBe('You already have a Burette account');
    expect(mail?.text).not.toContain('token=');
  });

  it('keeps a stranger who signed up first from owning the account: the later owner of the mailbox wins', async () => {
    await browser().post(auth('sign-up'), { ...wish('victim@moor.example'), password: 'stranger chose this one' });
    const strangersToken = await tokenInMailTo('victim@moor.example');
    await browser().post(auth('sign-up'), wish('victim@moor.example'));
    const ownToken = await tokenInMailTo('victim@moor.example');
    expect((await browser().post(auth('verify'), { token: strangersToken, password })).status).toBe(401);
    expect((await browser().post(auth('verify'), { token: ownToken, password })).status).toBe(200);
    const late = { token: strangersToken, password: 'stranger chose this one' };
    expect((await browser().post(auth('verify'), late)).status).toBe(410);
  });

  it.each([
    ['a short password', { password: 'short' }, 'invalid_input'],
    ['a common password', { password: 'Password1234!' }, 'password_too_weak'],
    ['a password made of one’s own name', { password: 'adamoor2026' + '!!' }, 'password_too_weak'],
    ['no e-mail address', { email: 'ada at moor' }, 'invalid_input'],
    ['a name of two lines', { name: 'Ada\r\nBcc: all@moor.example' }, 'invalid_input'],
    ['an empty team name', { teamName: '  ' }, 'invalid_input'],
    ['an unknown field', { operator: true }, 'invalid_input'],
  ])('refuses %s and queues nothing', async (_, change, code) => {
    const before = await Mail.count();
    const answer = await browser().post(auth('sign-up'), { ...wish('bad@moor.example'), ...change });
    expect([answer.status, await codeOf(answer)]).toEqual([422, code]);
    expect(await Mail.count()).toBe(before);
  });

  it('does not carry a stranger’s words into the mail', async () => {
    const words = 'WIN AT http://bad.example';
    await browser().post(auth('sign-up'), { ...wish('relay@moor.example'), name: words, teamName: words });
    const [mail] = await mailsTo('relay@moor.example');
    expect(`${mail?.subject} ${mail?.text} ${mail?.html}`).not.toContain('bad.example');
  });
});

describe('sign-in and sessions', () => {
  it('sets a cookie that scripts cannot read and other sites cannot send, and stores only its hash', async () => {
    await makeUser({ email: 'cookie@moor.example' });
    const answer = await callEndpoint({
      method: 'POST',
      path: auth('sign-in'),
      headers: { Origin: 'http://burette.test' },
      body: { email: 'cookie@moor.example', password: testPassword },
    });
    const [cookie = ''] = answer.headers.getSetCookie();
    expect(cookie).toMatch(/^burette_session=[a-z0-9]{40};/);
    expect(cookie).toContain('HttpOnly');
    expect(cookie).toContain('SameSite=Lax');
    expect(cookie).toContain('Path=/');
    const secret = /=([^;]+)/.exec(cookie)![1]!;
    expect(await Session.findByPk(secret)).toBeNull();
    expect(await Session.findByPk(storedSessionId({ Cookie: `x=${secret}` }))).not.toBeNull();
  });

  it('gives the same answer for a wrong password and for an unknown address', async () => {
    await makeUser({ email: 'exists@moor.example' });
    const attempts = ['exists@moor.example', 'nobody@moor.example'].map((email) =>
      browser().post(auth('sign-in'), { email, password: 'not the password' }),
    );
    const [wrong, unknown] = await Promise.all(attempts);
    const told = async (response: Response) => {
      const { requestId: _, ...rest } = (await response.json()) as Record<string, unknown>;
      return { status: response.status, ...rest };
    };
    expect(await told(wrong!)).toEqual(await told(unknown!));
  });

  it('never takes over a session id that came with the request (fixation), and ends the old session', async () => {
    await makeUser({ email: 'fixed@moor.example' });
    const person = browser();
    person.jar.set('burette_session', 'attackerchosenattackerchosenattackerchos');
    await person.post(auth('sign-in'), { email: 'fixed@moor.example', password: testPassword });
    const first = person.jar.get('burette_session')!;
    expect(first).not.toContain('attacker');
    await person.post(auth('sign-in'), { email: 'fixed@moor.example', password: testPassword });
    expect(person.jar.get('burette_session')).not.toBe(first);
    const stale = await callEndpoint({ path: '/api/v1/account', headers: { Cookie: `burette_session=${first}` } });
    expect(stale.status).toBe(401);
  });

  it('ends at sign-out, whatever keeps the cookie', async () => {
    const person = await signedUp('leaver@moor.example');
    const kept = person.jar.get('burette_session')!;
    expect((await person.call({ method: 'POST', path: auth('sign-out') })).status).toBe(204);
    expect(person.jar.size).toBe(0);
    const again = await callEndpoint({ path: '/api/v1/account', headers: { Cookie: `burette_session=${kept}` } });
    expect(again.status).toBe(401);
  });

  it('ends after thirty days however much it is used', async () => {
    const person = await signedUp('long@moor.example');
    const user = await User.findOne({ where: { email: 'long@moor.example' } });
    const row = (await Session.findOne({ where: { userId: user!.id } }))!;
    await row.update({
      createdAt: new Date(Date.now() - 29.9 * 86_400_000).toISOString(),
      expiresAt: new Date(Date.now() + 86_400_000).toISOString(),
    });
    expect((await person.call({ path: '/api/v1/account' })).status).toBe(200);
    await row.update({ createdAt: new Date(Date.now() - 30.1 * 86_400_000).toISOString() });
    expect((await person.call({ path: '/api/v1/account' })).status).toBe(401);
  });

  it('slides while it is used and renews the cookie', async () => {
    const person = await signedUp('slide@moor.example');
    const user = await User.findOne({ where: { email: 'slide@moor.example' } });
    const soon = new Date(Date.now() + 86_400_000).toISOString();
    await Session.update({ expiresAt: soon }, { where: { userId: user!.id } });
    const answer = await person.call({ path: '/api/v1/account' });
    expect(answer.headers.getSetCookie()[0]).toContain('burette_session=');
    expect((await Session.findOne({ where: { userId: user!.id } }))!.expiresAt > soon).toBe(true);
  });

  it('lists one’s sessions and ends one elsewhere, never somebody else’s', async () => {
    const here = await signedUp('list@moor.example');
    const there = browser({ address: '198.51.100.4' });
    await there.post(auth('sign-in'), { email: 'list@moor.example', password });
    const { sessions } = (await (await here.call({ path: '/api/v1/account/sessions' })).json()) as {
      sessions: { id: string; present: boolean; address: string }[];
    };
    expect(sessions.map(({ present }) => present).sort()).toEqual([false, true]);
    const other = sessions.find(({ present }) => !present)!;
    const stranger = await signedUp('stranger@moor.example');
    const refused = await stranger.call({ method: 'DELETE', path: `/api/v1/account/sessions/${other.id}` });
    expect(refused.status).toBe(404);
    expect((await here.call({ method: 'DELETE', path: `/api/v1/account/sessions/${other.id}` })).status).toBe(204);
    expect((await there.call({ path: '/api/v1/account' })).status).toBe(401);
    expect((await here.call({ path: '/api/v1/account' })).status).toBe(200);
  });
});

describe('reset and change of password', () => {
  it('sets a new password once, ends every other session and tells the owner', async () => {
    const old = await signedUp('reset@moor.example');
    await browser().post(auth('reset-request'), { email: 'reset@moor.example' });
    const token = await tokenInMailTo('reset@moor.example');
    const person = browser();
    const weak = await person.post(auth('reset'), { token, password: 'qwertyuiop123' });
    expect([weak.status, await codeOf(weak)]).toEqual([422, 'password_too_weak']);
    const next = 'nine copper kettles sing';
    expect((await person.post(auth('reset'), { token, password: next })).status).toBe(200);
    expect((await person.call({ path: '/api/v1/account' })).status).toBe(200);
    expect((await old.call({ path: '/api/v1/account' })).status).toBe(401);
    expect((await browser().post(auth('reset'), { token, password: next })).status).toBe(410);
    const withOld = await browser().post(auth('sign-in'), { email: 'reset@moor.example', password });
    expect(withOld.status).toBe(401);
    expect((await mailsTo('reset@moor.example')).at(-1)?.subject).toBe('Your Burette password was changed');
  });

  it('ends the earlier reset links when one is used', async () => {
    await signedUp('twolinks@moor.example');
    await browser().post(auth('reset-request'), { email: 'twolinks@moor.example' });
    const first = await tokenInMailTo('twolinks@moor.example');
    await browser().post(auth('reset-request'), { email: 'twolinks@moor.example' });
    const second = await tokenInMailTo('twolinks@moor.example');
    await browser().post(auth('reset'), { token: second, password: 'nine copper kettles sing' });
    const late = await browser().post(auth('reset'), { token: first, password: 'ten copper kettles sing' });
    expect(late.status).toBe(410);
  });

  it('answers an unknown address as a known one and mails nothing', async () => {
    await makeUser({ email: 'real@moor.example' });
    const known = await browser().post(auth('reset-request'), { email: 'real@moor.example' });
    const unknown = await browser().post(auth('reset-request'), { email: 'unreal@moor.example' });
    expect([known.status, (await known.text()).replace('real@', '')]).toEqual([
      unknown.status,
      (await unknown.text()).replace('unreal@', ''),
    ]);
    expect(await mailsTo('unreal@moor.example')).toEqual([]);
  });

  it('does not take a link of another purpose', async () => {
    await browser().post(auth('sign-up'), wish('purpose@moor.example'));
    const token = await tokenInMailTo('purpose@moor.example');
    const crossed = await browser().post(auth('reset'), { token, password: 'nine copper kettles sing' });
    expect(crossed.status).toBe(410);
  });

  it('changes a password only with the present one, and signs out elsewhere', async () => {
    const here = await signedUp('change@moor.example');
    const there = browser();
    await there.post(auth('sign-in'), { email: 'change@moor.example', password });
    const path = '/api/v1/account/password';
    const next = 'nine copper kettles sing';
    expect((await here.post(path, { presentPassword: 'wrong wrong wrong', newPassword: next })).status).toBe(401);
    expect((await here.post(path, { presentPassword: password, newPassword: next })).status).toBe(204);
    expect((await here.call({ path: '/api/v1/account' })).status).toBe(200);
    expect((await there.call({ path: '/api/v1/account' })).status).toBe(401);
  });

  it('keeps nothing readable of links and passwords in the database', async () => {
    await browser().post(auth('sign-up'), wish('secret@moor.example'));
    const token = await tokenInMailTo('secret@moor.example');
    const row = (await OneTimeLink.findOne({ where: { email: 'secret@moor.example' } }))!;
    const stored = JSON.stringify(row.toJSON());
    expect(stored).not.toContain(token);
    expect(stored).not.toContain(password);
    // Parameters of OWASP's password storage cheat sheet, argon2id with 19 MiB (from memory).
    expect(row.details?.passwordHash).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
  });
});

describe('rate limits', () => {
  const guess = (email: string, address: string) =>
    browser({ address }).post(auth('sign-in'), { email, password: 'not the password' });

  it('stop guessing from one address with 429 and Retry-After, and leave other addresses alone', async () => {
    await makeUser({ email: 'guessed@moor.example' });
    for (let attempt = 0; attempt < 10; attempt++)
      expect((await guess('guessed@moor.example', '203.0.113.5')).status).toBe(401);
    const limited = await guess('guessed@moor.example', '203.0.113.5');
    expect([limited.status, await codeOf(limited)]).toEqual([429, 'rate_limited']);
    expect(Number(limited.headers.get('Retry-After'))).toBeGreaterThan(0);
    const elsewhere = await browser({ address: '198.51.100.77' }).post(auth('sign-in'), {
      email: 'guessed@moor.example',
      password: testPassword,
    });
    expect(elsewhere.status).toBe(200);
  });

  it('cannot shut a person out of where they are at home, even when many addresses guess', async () => {
    await makeUser({ email: 'home@moor.example' });
    const home = browser({ address: '192.0.2.200' });
    const right = { email: 'home@moor.example', password: testPassword };
    await home.post(auth('sign-in'), right);
    const statuses: number[] = [];
    for (let attempt = 0; attempt < 31; attempt++)
      statuses.push((await guess('home@moor.example', `203.0.113.${attempt + 20}`)).status);
    expect(statuses.at(-1)).toBe(429);
    expect((await browser({ address: '192.0.2.200' }).post(auth('sign-in'), right)).status).toBe(200);
  });

  it('count attempts that run at the same time', async () => {
    await makeUser({ email: 'burst@moor.example' });
    const burst = Array.from({ length: 25 }, () => guess('burst@moor.example', '203.0.113.6'));
    const statuses = (await Promise.all(burst)).map(({ status }) => status);
    expect(statuses.filter((status) => status === 401)).toHaveLength(10);
  });

  it('bound the mails that strangers can send to an address', async () => {
    const statuses: number[] = [];
    for (let attempt = 0; attempt < 6; attempt++)
      statuses.push((await browser().post(auth('reset-request'), { email: 'flood@moor.example' })).status);
    expect(statuses).toEqual([202, 202, 202, 202, 202, 429]);
  });

  it('stop guessing of tokens, while a good token from the same address keeps working', async () => {
    const { team, people } = await makeTeam();
    const { bearerHeaders } = await import('../factories/people.ts');
    const good = await bearerHeaders({ user: people.viewer, team });
    const guessToken = () =>
      callEndpoint({
        path: '/api/v1/teams',
        headers: { Authorization: 'Bearer burette_guess' },
        address: '203.0.113.8',
      });
    let status = 401;
    for (let attempt = 0; attempt < 61; attempt++) status = (await guessToken()).status;
    expect(status).toBe(429);
    const path = `/api/v1/teams/${team.slug}`;
    expect((await callEndpoint({ path, headers: good, address: '203.0.113.8' })).status).toBe(200);
  });
});
