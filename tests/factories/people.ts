/** People, teams and credentials for tests: real rows made by the product's own verbs. */
import { Membership, type Team, type User } from '@db/models/people.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { tokenScopes, type Role, type TokenScope } from '@/domain/teams/permissions.ts';
import { beginSession } from '@/server/auth/begin-session.ts';
import { createPerson } from '@/server/auth/create-person.ts';
import { issueToken } from '@/server/auth/issue-token.ts';
import { hashPassword } from '@/server/auth/password-hash.ts';
import { hashSecret } from '@/server/auth/secret-hash.ts';
import { addMember } from '@/server/teams/add-member.ts';
import { createTeam } from '@/server/teams/create-team.ts';

/** What every made person signs in with. */
export const testPassword = 'copper kettle nine drums';
let testPasswordHash: Promise<string> | undefined;
let count = 0;

/** A person with a verified address; `email` defaults to one nobody else has. */
export async function makeUser(options: { email?: string; name?: string; operator?: boolean } = {}): Promise<User> {
  testPasswordHash ??= hashPassword(testPassword);
  count += 1;
  const { email = `person${count}@people.example`, name = `Person ${count}`, operator = false } = options;
  return createPerson({ email, name, operator, passwordHash: await testPasswordHash });
}

export interface MadeTeam {
  team: Team;
  /** One person for each role. */
  people: Record<Role, User>;
  members: Record<Role, Membership>;
  /** As a service's `actor`. */
  actors: Record<Role, Actor>;
}

/** A team with an owner, a finance admin, a modeller and a viewer. No credits: grant what the test needs. */
export async function makeTeam(options: { name?: string } = {}): Promise<MadeTeam> {
  const owner = await makeUser();
  const team = await createTeam({ name: options.name ?? `Team ${count}`, ownerUserId: owner.id });
  const people: Partial<Record<Role, User>> = { owner };
  for (const role of ['finance', 'modeller', 'viewer'] as const) {
    const person = await makeUser();
    await addMember({ teamId: team.id, userId: person.id, roles: [role] });
    people[role] = person;
  }
  const rows = await Membership.findAll({ where: { teamId: team.id } });
  const perRole = <T>(make: (user: User) => T): Record<Role, T> =>
    Object.fromEntries(Object.entries(people).map(([role, user]) => [role, make(user)])) as Record<Role, T>;
  return {
    team,
    people: perRole((user) => user),
    members: perRole((user) => rows.find((row) => row.userId === user.id)!),
    actors: perRole(actorOf),
  };
}

/** The actor of a signed-in person, for calling services directly. */
export const actorOf = (user: User): Actor => ({
  kind: 'user',
  userId: user.id,
  operator: Boolean(user.operator),
  sessionId: `session of ${user.id}`,
});

/** Headers of a browser in which the person is signed in; they hold a real session and the site's Origin. */
export async function signedInHeaders(user: User, publicUrl = 'http://burette.test'): Promise<Record<string, string>> {
  const visitor = { address: '192.0.2.1', userAgent: 'tests', sessionId: null };
  const { secret } = await beginSession({ userId: user.id, visitor });
  return { Cookie: `burette_session=${secret}`, Origin: publicUrl };
}

/** Headers of a script with a real API token; all scopes unless some are named. */
export async function bearerHeaders(options: {
  user: User;
  team: Team;
  scopes?: TokenScope[];
  expiresAt?: string | null;
}): Promise<Record<string, string>> {
  const { user, team, scopes = tokenScopes, expiresAt = null } = options;
  const { secret } = await issueToken({ userId: user.id, teamId: team.id, name: 'test', scopes, expiresAt });
  return { Authorization: `Bearer ${secret}` };
}

/** The stored id of the session in `signedInHeaders`. */
export const storedSessionId = (headers: Record<string, string>): string =>
  hashSecret(headers['Cookie']?.split('=')[1] ?? '');
