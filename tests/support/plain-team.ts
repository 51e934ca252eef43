/** A bare team row for tests that need no people. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Team } from '@db/models/people.ts';
import { newId } from '@/server/ids.ts';

/** Its id. */
export async function plainTeam(): Promise<string> {
  const id = newId('team');
  await inWriteTransaction(() =>
    Team.create({
      id,
      slug: id.toLowerCase().replace('_', '-'),
      name: 'Plain team',
      createdAt: '2026-12-01T00:00:00.000Z',
    }),
  );
  return id;
}
