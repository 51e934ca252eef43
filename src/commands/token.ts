/**
 * `npm run --silent token -- --email E --team T`: prints an API token of that person for that team, and nothing else.
 *
 * Works beside a running server: it adds one row to the database in BURETTE_DATA_DIR and migrates nothing. Whoever can
 * run it can read the database anyway, so it asks for no password.
 */
import { existsSync } from 'node:fs';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { Membership, Team, User } from '@db/models/people.ts';
import { tokenScopes } from '@/domain/teams/permissions.ts';
import { issueToken } from '@/server/auth/issue-token.ts';
import { nowText } from '@/server/clock.ts';
import { env } from '@/server/env.ts';

const usage = 'Usage: npm run --silent token -- --email <address> --team <slug> [--days <1 to 3650, default 30>]';
const dayMs = 24 * 60 * 60 * 1000;

/** A sentence for the terminal instead of a stack trace. */
class Stop extends Error {}

function readArguments(): { email: string; team: string; days: number } {
  try {
    const { values } = parseArgs({
      options: { email: { type: 'string' }, team: { type: 'string' }, days: { type: 'string', default: '30' } },
    });
    const days = Number(values.days);
    if (!values.email || !values.team || !Number.isInteger(days) || days < 1 || days > 3650) throw new Stop(usage);
    return { email: values.email.trim().toLowerCase(), team: values.team.trim(), days };
  } catch (error) {
    throw error instanceof Stop ? error : new Stop(`${(error as Error).message}\n${usage}`);
  }
}

async function makeToken(): Promise<string> {
  const { email, team: slug, days } = readArguments();
  const file = path.join(env().BURETTE_DATA_DIR, 'burette.sqlite');
  if (!existsSync(file))
    throw new Stop(`There is no database in ${env().BURETTE_DATA_DIR}. Run npm start first, or set BURETTE_DATA_DIR.`);
  openDatabase(file);
  const [user, team] = [await User.findOne({ where: { email } }), await Team.findOne({ where: { slug } })];
  if (!user) throw new Stop(`Nobody signs in as ${email} here.`);
  if (!team) throw new Stop(`There is no team ${slug} here.`);
  const membership = await Membership.findOne({ where: { userId: user.id, teamId: team.id, removedAt: null } });
  if (!membership) throw new Stop(`${email} is not a member of ${slug}.`);
  const { secret } = await issueToken({
    userId: user.id,
    teamId: team.id,
    name: 'made by npm run token',
    scopes: tokenScopes,
    expiresAt: nowText(days * dayMs),
  });
  return secret;
}

try {
  const secret = await makeToken();
  await closeDatabase();
  console.log(secret);
} catch (error) {
  await closeDatabase();
  const outdated = /no such (table|column)/.test((error as Error).message);
  if (error instanceof Stop) console.error(error.message);
  else if (outdated) console.error('The database is older than this program. Start the server once, then try again.');
  else throw error;
  process.exitCode = 1;
}
