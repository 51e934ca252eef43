/** Teams at work through the real endpoints: invitations, roles, leaving, project codes, tokens, suspension. */
import { beforeEach, describe, expect, it } from 'vitest';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Membership, User, type Team } from '@db/models/people.ts';
import { setClock } from '@/server/clock.ts';
import { resetRateLimits } from '@/server/http/rate-limit.ts';
import { addMember } from '@/server/teams/add-member.ts';
import { makeTeam, makeUser, testPassword } from '../factories/people.ts';
import { browser, type Browser } from '../support/call-endpoint.ts';
import { mailsTo, tokenInMailTo } from '../support/mailbox.ts';
import { useTestDatabase } from '../support/test-database.ts';

useTestDatabase();
beforeEach(() => {
  resetRateLimits();
  setClock(null);
});

const accepting = '/api/v1/auth/invitations/accept';
const codeOf = async (response: Response) => ((await response.json()) as { code: string }).code;
const at = (team: Team, rest = '') => `/api/v1/teams/${team.slug}${rest}`;

async function signedIn(user: User): Promise<Browser> {
  const person = browser();
  const answer = await person.post('/api/v1/auth/sign-in', { email: user.email, password: testPassword });
  expect(answer.status).toBe(200);
  return person;
}

async function invited(email: string, roles = ['modeller']) {
  const made = await makeTeam();
  const owner = await signedIn(made.people.owner);
  const answer = await owner.post(at(made.team, '/invitations'), { email, roles });
  expect(answer.status).toBe(201);
  const { invitation } = (await answer.json()) as { invitation: { id: string } };
  return { ...made, owner, invitation, token: await tokenInMailTo(email) };
}

describe('an invitation', () => {
  const newcomer = { name: 'Nia Beck', password: 'seven quiet herons wade' };

  it('makes a member and an account of somebody new, by one POST with the mailed token', async () => {
    const { team, token } = await invited('nia@guest.example', ['modeller', 'finance']);
    const guest = browser();
    const shown = await guest.post('/api/v1/auth/invitations/show', { token });
    expect(await shown.json()).toMatchObject({
      invitation: { email: 'nia@guest.example', roles: ['finance', 'modeller'], hasAccount: false },
    });
    const joined = await guest.post(accepting, { token, ...newcomer });
    expect([joined.status, ((await joined.json()) as { team: object }).team]).toEqual([
      200,
      { slug: team.slug, name: team.name, roles: ['finance', 'modeller'] },
    ]);
    const read = await guest.call({ path: at(team) });
    expect(((await read.json()) as { team: { permissions: string[] } }).team.permissions).toContain('jobs:launch');
  });

  it('is for the invited address: another account is refused and the link stays', async () => {
    await makeUser({ email: 'right@guest.example' });
    const { token } = await invited('right@guest.example');
    const stranger = await signedIn(await makeUser());
    const refused = await stranger.post(accepting, { token });
    expect([refused.status, await codeOf(refused)]).toEqual([403, 'forbidden']);
    const signedOut = await browser().post(accepting, { token, ...newcomer });
    expect([signedOut.status, await codeOf(signedOut)]).toEqual([401, 'not_signed_in']);
    const right = await signedIn((await User.findOne({ where: { email: 'right@guest.example' } }))!);
    expect((await right.post(accepting, { token })).status).toBe(200);
  });

  it('works once, not after a week, and not once withdrawn', async () => {
    const used = await invited('once@guest.example');
    await browser().post(accepting, { token: used.token, ...newcomer });
    expect((await browser().post(accepting, { token: used.token, ...newcomer })).status).toBe(410);

    const late = await invited('late@guest.example');
    setClock(() => Date.now() + 8 * 86_400_000);
    expect((await browser().post(accepting, { token: late.token, ...newcomer })).status).toBe(410);
    setClock(null);

    const withdrawn = await invited('gone@guest.example');
    const path = at(withdrawn.team, `/invitations/${withdrawn.invitation.id}`);
    expect((await withdrawn.owner.call({ method: 'DELETE', path })).status).toBe(204);
    expect((await browser().post(accepting, { token: withdrawn.token, ...newcomer })).status).toBe(410);
    expect((await withdrawn.owner.call({ method: 'DELETE', path })).status).toBe(404);
  });

  it('sent again ends the earlier link, also after it had expired', async () => {
    const { team, owner, invitation, token } = await invited('again@guest.example');
    const resent = await owner.call({ method: 'POST', path: at(team, `/invitations/${invitation.id}/resend`) });
    expect(resent.status).toBe(200);
    const second = await tokenInMailTo('again@guest.example');
    expect(await mailsTo('again@guest.example')).toHaveLength(2);
    expect((await browser().post(accepting, { token, ...newcomer })).status).toBe(410);
    expect((await browser().post(accepting, { token: second, ...newcomer })).status).toBe(200);
  });

  it('of the same address replaces the one before; of a member it is refused', async () => {
    const { team, owner, people, token } = await invited('twice@guest.example');
    await owner.post(at(team, '/invitations'), { email: 'TWICE@guest.example', roles: ['viewer'] });
    expect((await browser().post(accepting, { token, ...newcomer })).status).toBe(410);
    const { invitations } = (await (await owner.call({ path: at(team, '/invitations') })).json()) as {
      invitations: object[];
    };
    expect(invitations).toMatchObject([{ email: 'twice@guest.example', roles: ['viewer'] }]);
    const again = await owner.post(at(team, '/invitations'), { email: people.viewer.email, roles: ['owner'] });
    expect([again.status, await codeOf(again)]).toEqual([409, 'already_a_member']);
  });

  it('asks somebody new for a name and a good password, and is not used up by their absence', async () => {
    const { token } = await invited('bare@guest.example');
    const bare = await browser().post(accepting, { token });
    expect(await bare.json()).toMatchObject({
      code: 'invalid_input',
      errors: [{ path: 'name' }, { path: 'password' }],
    });
    const weak = await browser().post(accepting, { token, name: 'Nia', password: 'qwertyuiop123' });
    expect(await codeOf(weak)).toBe('password_too_weak');
    expect((await browser().post(accepting, { token, ...newcomer })).status).toBe(200);
  });

  it.each([
    [{ email: 'x@guest.example', roles: [] }],
    [{ email: 'x@guest.example', roles: ['operator'] }],
    [{ email: 'not an address', roles: ['viewer'] }],
    [{ email: 'x@guest.example\r\nBcc: y@guest.example', roles: ['viewer'] }],
  ])('is not made from %j', async (body) => {
    const { team, people } = await makeTeam();
    const owner = await signedIn(people.owner);
    expect((await owner.post(at(team, '/invitations'), body)).status).toBe(422);
  });

  it('repeated with the same Idempotency-Key is sent once', async () => {
    const { team, people } = await makeTeam();
    const owner = await signedIn(people.owner);
    const call = {
      method: 'POST',
      path: at(team, '/invitations'),
      body: { email: 'key@guest.example', roles: ['viewer'] },
      headers: { 'Idempotency-Key': 'one' },
    };
    const [first, second] = [await owner.call(call), await owner.call(call)];
    expect(await first.json()).toEqual(await second.json());
    expect(await mailsTo('key@guest.example')).toHaveLength(1);
    const other = await owner.call({ ...call, body: { ...call.body, roles: ['finance'] } });
    expect(await codeOf(other)).toBe('idempotency_key_reused');
  });
});

describe('roles', () => {
  it('change at once for sessions that are open', async () => {
    const { team, people, members } = await makeTeam();
    const [owner, viewer] = [await signedIn(people.owner), await signedIn(people.viewer)];
    const code = { code: 'A-1' };
    expect((await viewer.post(at(team, '/project-codes'), code)).status).toBe(403);
    const path = at(team, `/members/${members.viewer.id}`);
    const changed = await owner.call({ method: 'PATCH', path, body: { roles: ['viewer', 'finance'] } });
    expect(((await changed.json()) as { member: object }).member).toMatchObject({ roles: ['finance', 'viewer'] });
    expect((await viewer.post(at(team, '/project-codes'), code)).status).toBe(201);
  });

  it('leave a team its last owner, whichever way it is tried', async () => {
    const { team, people, members } = await makeTeam();
    const owner = await signedIn(people.owner);
    const path = at(team, `/members/${members.owner.id}`);
    const tries = [
      await owner.call({ method: 'PATCH', path, body: { roles: ['viewer'] } }),
      await owner.call({ method: 'DELETE', path }),
      await owner.call({ method: 'POST', path: at(team, '/leave') }),
    ];
    for (const answer of tries) expect([answer.status, await codeOf(answer)]).toEqual([409, 'last_owner']);
  });

  it('leave one owner when two leave at the same time', async () => {
    const { team, people } = await makeTeam();
    const second = await makeUser();
    await addMember({ teamId: team.id, userId: second.id, roles: ['owner'] });
    const owners = [await signedIn(people.owner), await signedIn(second)];
    const answers = await Promise.all(owners.map((one) => one.call({ method: 'POST', path: at(team, '/leave') })));
    expect(answers.map(({ status }) => status).sort()).toEqual([204, 409]);
  });

  it('of another team cannot be reached through one’s own', async () => {
    const [mine, theirs] = [await makeTeam(), await makeTeam()];
    const owner = await signedIn(mine.people.owner);
    const path = at(mine.team, `/members/${theirs.members.viewer.id}`);
    expect((await owner.call({ method: 'PATCH', path, body: { roles: ['owner'] } })).status).toBe(404);
    expect((await owner.call({ method: 'DELETE', path })).status).toBe(404);
    expect((await Membership.findByPk(theirs.members.viewer.id))!.roles).toEqual(['viewer']);
  });
});

describe('a removed member', () => {
  it('sees nothing of the team at once, stays in its history and can be invited again', async () => {
    const { team, people, members } = await makeTeam();
    const [owner, modeller] = [await signedIn(people.owner), await signedIn(people.modeller)];
    const path = at(team, `/members/${members.modeller.id}`);
    expect((await owner.call({ method: 'DELETE', path })).status).toBe(204);
    expect((await modeller.call({ path: at(team) })).status).toBe(404);
    expect((await Membership.findByPk(members.modeller.id))!.removedAt).not.toBeNull();
    await owner.post(at(team, '/invitations'), { email: people.modeller.email, roles: ['viewer'] });
    const token = await tokenInMailTo(people.modeller.email);
    expect((await modeller.post(accepting, { token })).status).toBe(200);
    expect((await modeller.call({ path: at(team) })).status).toBe(200);
  });
});

describe('lists', () => {
  it('of members come in pages that together hold each once', async () => {
    const { team, people } = await makeTeam();
    const owner = await signedIn(people.owner);
    const seen: string[] = [];
    let cursor: string | null = '';
    while (cursor !== null) {
      const path: string = at(team, `/members?limit=3${cursor ? `&cursor=${cursor}` : ''}`);
      const page = (await (await owner.call({ path })).json()) as {
        members: { email: string }[];
        nextCursor: string | null;
      };
      seen.push(...page.members.map(({ email }) => email));
      cursor = page.nextCursor;
    }
    expect(seen).toEqual(Object.values(people).map(({ email }) => email));
  });

  it.each(['?limit=0', '?limit=201', '?limit=x'])('refuse %s', async (query) => {
    const { team, people } = await makeTeam();
    const owner = await signedIn(people.owner);
    expect((await owner.call({ path: at(team, `/members${query}`) })).status).toBe(422);
  });
});

describe('project codes', () => {
  it('are unique in their team whatever the letter case, can be closed and opened again', async () => {
    const { team, people } = await makeTeam();
    const finance = await signedIn(people.finance);
    const path = at(team, '/project-codes');
    const made = await finance.post(path, { code: 'Orrin-7', client: 'Orrin', poNumber: 'PO 1' });
    const { projectCode } = (await made.json()) as { projectCode: { id: string } };
    const again = await finance.post(path, { code: 'ORRIN-7' });
    expect(await again.json()).toMatchObject({ code: 'invalid_input', errors: [{ path: 'code', code: 'taken' }] });
    const change = (body: object) => finance.call({ method: 'PATCH', path: `${path}/${projectCode.id}`, body });
    expect(await (await change({ closed: true })).json()).toMatchObject({
      projectCode: { closedAt: expect.any(String), client: 'Orrin', poNumber: 'PO 1' },
    });
    expect(await (await change({ closed: false, poNumber: null })).json()).toMatchObject({
      projectCode: { closedAt: null, poNumber: null, client: 'Orrin' },
    });
    const other = await makeTeam();
    const elsewhere = await signedIn(other.people.finance);
    expect((await elsewhere.post(at(other.team, '/project-codes'), { code: 'ORRIN-7' })).status).toBe(201);
  });
});

describe('tokens', () => {
  it('are seen and revoked by their person and by owners, not by others', async () => {
    const { team, people } = await makeTeam();
    const [owner, modeller, viewer] = [
      await signedIn(people.owner),
      await signedIn(people.modeller),
      await signedIn(people.viewer),
    ];
    const path = at(team, '/tokens');
    const made = await modeller.post(path, { name: 'nightly', scopes: ['jobs:launch'], expiresInDays: 30 });
    const { token } = (await made.json()) as { token: { id: string; expiresAt: string } };
    expect(Date.parse(token.expiresAt) - Date.now()).toBeGreaterThan(29.9 * 86_400_000);
    const namesFor = async (person: Browser) =>
      ((await (await person.call({ path })).json()) as { tokens: { name: string }[] }).tokens.map(({ name }) => name);
    expect([await namesFor(modeller), await namesFor(owner), await namesFor(viewer)]).toEqual([
      ['nightly'],
      ['nightly'],
      [],
    ]);
    const revoke = { method: 'DELETE', path: `${path}/${token.id}` };
    expect((await viewer.call(revoke)).status).toBe(404);
    expect((await owner.call(revoke)).status).toBe(204);
  });

  it.each([[[]], [['team:manage']], [['tokens:manage']], [['everything']]])(
    'cannot have the scopes %j',
    async (scopes) => {
      const { team, people } = await makeTeam();
      const owner = await signedIn(people.owner);
      expect((await owner.post(at(team, '/tokens'), { name: 'x', scopes })).status).toBe(422);
    },
  );
});

describe('a suspended team', () => {
  it('can be read and not changed', async () => {
    const { team, people } = await makeTeam();
    const owner = await signedIn(people.owner);
    await inWriteTransaction(() => team.update({ suspendedAt: '2026-12-01T00:00:00.000Z' }));
    expect((await owner.call({ path: at(team) })).status).toBe(200);
    const written = await owner.post(at(team, '/project-codes'), { code: 'A-1' });
    expect([written.status, await codeOf(written)]).toEqual([403, 'team_suspended']);
  });
});

describe('the team itself', () => {
  it('takes a new name and a time zone of the IANA list, keeping its slug', async () => {
    const { team, people } = await makeTeam();
    const owner = await signedIn(people.owner);
    const change = (body: object) => owner.call({ method: 'PATCH', path: at(team), body });
    expect(await (await change({ name: 'Renamed', timeZone: 'Europe/London' })).json()).toMatchObject({
      team: { name: 'Renamed', timeZone: 'Europe/London', slug: team.slug },
    });
    expect((await change({ timeZone: 'Mars/Olympus' })).status).toBe(422);
  });
});
