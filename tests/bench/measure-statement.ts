/**
 * Times the statement of a team with 100,000 ledger entries in one month on this machine:
 * npx tsx tests/bench/measure-statement.ts [entries]
 */
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { closeDatabase, openDatabase } from '@db/connection.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { migrate } from '@db/migrate.ts';
import { createPerson } from '@/server/auth/create-person.ts';
import { readEnv, setEnv } from '@/server/env.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { listLedger } from '@/server/ledger/list-ledger.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { listStatementLines } from '@/server/statements/list-statement-lines.ts';
import { readStatement } from '@/server/statements/read-statement.ts';
import { readYearSummary } from '@/server/statements/read-year-summary.ts';
import { createTeam } from '@/server/teams/create-team.ts';

const entries = Number(process.argv[2] ?? 100_000);
const folder = await mkdtemp(path.join(tmpdir(), 'burette-statement-'));
setEnv(readEnv({ NODE_ENV: 'test', LOG_LEVEL: 'fatal', BURETTE_DATA_DIR: folder }));
openDatabase(path.join(folder, 'burette.sqlite'));
await migrate();
const person = await createPerson({ email: 'a@measure.example', name: 'A', operator: false, passwordHash: 'none' });
const team = await createTeam({ name: 'Measured', ownerUserId: person.id });
const teamId = team.id;
await grantCredits({ teamId, amountMicrocredits: 10 ** 12, reason: 'To measure', grantId: 'measure' });
const perSegment = 100;
for (let first = 0; first < entries; first += perSegment)
  await inWriteTransaction(async () => {
    const of = { teamId, jobId: `job_${Math.floor(first / 500)}`, segmentId: `segment_${first}` };
    await holdCredits({ ...of, amountMicrocredits: 1_000_000, userId: null });
    for (let each = first; each < first + perSegment - 1; each += 1)
      await settleCharge({ ...of, settlementId: String(each), chargeMicrocredits: 100, memo: { events: '100' } });
  });
const actor = { kind: 'system', reason: 'measuring' } as const;
const by = { actor, team: team.slug };
const measured: Record<string, () => Promise<unknown>> = {
  statement: () => readStatement(by),
  'first 50 lines': () => listStatementLines(by),
  'year summary': () => readYearSummary(by),
  'first 50 ledger entries': () => listLedger(by),
};
for (const [name, run] of Object.entries(measured)) {
  const times: number[] = [];
  for (let round = 0; round < 11; round += 1) {
    const start = performance.now();
    await run();
    times.push(performance.now() - start);
  }
  const first = times[0]!;
  times.sort((one, other) => one - other);
  console.log(
    `${name}: first ${first.toFixed(0)} ms, median ${times[5]!.toFixed(0)} ms, worst ${times.at(-1)!.toFixed(0)} ms`,
  );
}
await closeDatabase();
await rm(folder, { recursive: true });
