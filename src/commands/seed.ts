/**
 * Puts the demo into an empty database: people, teams, project codes, models, bought credits, finished jobs, an open
 * pro-forma. A database that holds anybody is left alone. Everything goes through the same services as a request would.
 */
import { randomInt } from 'node:crypto';
import { existsSync } from 'node:fs';
import { mkdir, rm, writeFile } from 'node:fs/promises';
import path from 'node:path';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { migrate } from '@db/migrate.ts';
import { User, type Team } from '@db/models/people.ts';
import { demoOperator, kestrelBay, tarnFell, type DemoTeam } from '@db/seeds/demo-people.ts';
import { seedBilling } from './seed-billing.ts';
import { seedWork } from './seed-work.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { createPerson } from '@/server/auth/create-person.ts';
import { hashPassword } from '@/server/auth/password-hash.ts';
import { bootServer } from '@/server/boot.ts';
import { env } from '@/server/env.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { addMember } from '@/server/teams/add-member.ts';
import { createProjectCode } from '@/server/teams/create-project-code.ts';
import { createTeam } from '@/server/teams/create-team.ts';
import { must } from './must.ts';

interface SignIn {
  email: string;
  password: string;
  role: string;
}

/** Of a demo person: made anew for every database, so that none is fixed. */
function demoPassword(): string {
  const words =
    'amber basin cedar delta ember fjord grove heron inlet juniper kelp larch mossy north otter pebble'.split(' ');
  return [0, 1, 2].map(() => words[randomInt(words.length)]).join('-') + `-${randomInt(100, 1000)}`;
}

export const actorOf = (userId: string): Actor => ({ kind: 'user', userId, operator: false, sessionId: 'seed' });

async function seedPerson(
  signIns: SignIn[],
  person: { email: string; name: string; role: string; operator?: boolean },
) {
  const password = demoPassword();
  signIns.push({ email: person.email, password, role: person.role });
  const { email, name, operator = false } = person;
  return createPerson({ email, name, operator, passwordHash: await hashPassword(password) });
}

/** The first person of `demo` is its owner. */
async function seedTeam(demo: DemoTeam, signIns: SignIn[]): Promise<{ team: Team; actors: Map<string, Actor> }> {
  const actors = new Map<string, Actor>();
  let team: Team | null = null;
  for (const { email, name, roles } of demo.people) {
    const user = await seedPerson(signIns, { email, name, role: `${roles.join(', ')} of ${demo.name}` });
    actors.set(email.split('@')[0]!, actorOf(user.id));
    if (team) must(await addMember({ teamId: team.id, userId: user.id, roles }));
    else
      team = await createTeam({ name: demo.name, ownerUserId: user.id, timeZone: demo.timeZone, slugFrom: demo.slug });
  }
  if (!team) throw new Error(`${demo.name} has nobody in it.`);
  const { id, slug } = team;
  await inWriteTransaction(() =>
    grantCredits({ teamId: id, amountMicrocredits: 10_000_000, reason: 'Welcome grant', grantId: `welcome:${id}` }),
  );
  for (const code of demo.projectCodes)
    must(await createProjectCode({ actor: actors.get('owner')!, team: slug, ...code }));
  return { team, actors };
}

async function isEmpty(): Promise<boolean> {
  await mkdir(env().BURETTE_DATA_DIR, { recursive: true });
  openDatabase(path.join(env().BURETTE_DATA_DIR, 'burette.sqlite'));
  await migrate();
  const people = await User.count();
  await closeDatabase();
  return people === 0;
}

const unfinished = path.join(env().BURETTE_DATA_DIR, 'seeding');
if (existsSync(unfinished)) {
  console.error(`The demo was not put in completely the last time. Remove ${env().BURETTE_DATA_DIR} and start again.`);
  process.exit(1);
}
if (await isEmpty()) {
  console.log('Seeding the new database with the demo…');
  await writeFile(unfinished, '');
  const shutDown = await bootServer();
  const signIns: SignIn[] = [];
  const { team, actors } = await seedTeam(tarnFell, signIns);
  await seedTeam(kestrelBay, signIns);
  await seedPerson(signIns, { ...demoOperator, role: 'operator (Burette staff)', operator: true });
  await seedBilling({ teamId: team.id, team: team.slug, finance: actors.get('finance')! });
  await seedWork({
    team: tarnFell.slug,
    modellers: [actors.get('modeller')!, actors.get('modeller2')!],
    projectCodes: tarnFell.projectCodes.map(({ code }) => code),
  });
  await shutDown();
  // Passwords are made here and shown by `npm start`; only this user of this machine may read them.
  await writeFile(path.join(env().BURETTE_DATA_DIR, 'demo-people.json'), JSON.stringify(signIns, null, 2), {
    mode: 0o600,
  });
  await rm(unfinished);
}
