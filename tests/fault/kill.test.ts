/** Kills the real server at random moments of one long job: it goes on, and nothing shows that it was ever away. */
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { QueryTypes } from 'sequelize';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, database, openDatabase } from '@db/connection.ts';
import { migrate } from '@db/migrate.ts';
import { Batch } from '@db/models/jobs.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { readEnv, setEnv } from '@/server/env.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { bearerHeaders } from '@tests/factories/people.ts';
import { makeBench, type Bench } from '@tests/support/jobs.ts';
import { KillableServer } from './killable-server.ts';

const kills = 22;
const replicates = 120_000;
/** Longest random wait between a start and the kill after it. */
const longestMs = 1_500;

let folder = '';
let server: KillableServer;
let bench: Bench;
let headers: Record<string, string>;

beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'burette-fault-'));
  setEnv(readEnv({ NODE_ENV: 'test', LOG_LEVEL: 'fatal', BURETTE_DATA_DIR: folder }));
  openDatabase(path.join(folder, 'burette.sqlite'));
  await migrate();
  bench = await makeBench({ credits: 10_000 });
  headers = await bearerHeaders({ user: bench.people.owner, team: bench.team });
  await closeDatabase();
  server = await KillableServer.create(folder);
  await server.start();
});

afterAll(async () => {
  await server?.stop();
  await closeDatabase();
  await rm(folder, { recursive: true, force: true });
});

async function call<T>(route: string, body?: unknown): Promise<T> {
  const response = await fetch(`${server.url}/api/v1/teams/${bench.team.slug}/${route}`, {
    method: body === undefined ? 'GET' : 'POST',
    headers: { ...headers, 'Content-Type': 'application/json' },
    body: body === undefined ? null : JSON.stringify(body),
  });
  const text = await response.text();
  if (!response.ok) throw new Error(`${route}: ${response.status} ${text}\n${server.log}`);
  return JSON.parse(text) as T;
}

/** About 4,000 events a replicate, half a billion in all, in some two dozen batches. */
async function launchLongJob(): Promise<string> {
  const { quote } = await call<{ quote: { id: string; microcredits: { high: number } } }>('quotes', {
    modelVersionId: bench.modelVersionId,
    replicates,
    horizon: 100,
    gridIntervals: 20,
    method: 'exact',
    seed: '20261201',
    lane: 'steady',
  });
  const body = { quoteId: quote.id, name: 'Long job', capMicrocredits: 2 * quote.microcredits.high };
  return (await call<{ job: JobDocument }>('jobs', body)).job.id;
}

const read = async (id: string): Promise<JobDocument> => (await call<{ job: JobDocument }>(`jobs/${id}`)).job;

async function untilJob(id: string, holds: (job: JobDocument) => boolean): Promise<JobDocument> {
  for (;;) {
    const job = await read(id);
    if (holds(job)) return job;
    await new Promise((resolve) => setTimeout(resolve, 20));
  }
}

const over = ({ state }: JobDocument): boolean => state !== 'queued' && state !== 'running';

/** xorshift32: the moments are random and the same in every run. */
function uniforms(seed: number): () => number {
  let state = seed;
  return () => {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    return (state >>> 0) / 2 ** 32;
  };
}

describe('kill -9 of the server in the middle of a job', () => {
  it(`changes neither results nor charge when it happens ${kills} times`, async () => {
    const undisturbed = await untilJob(await launchLongJob(), over);
    expect(undisturbed.state).toBe('done');

    const id = await launchLongJob();
    const next = uniforms(20_261_201);
    for (let kill = 0; kill < kills; kill++) {
      // Whichever comes first, so that the job is still open at the last kill, which falls into writing the results.
      const moment = performance.now() + next() * longestMs;
      const progress = (replicates * (kill + 1)) / kills;
      const job = await untilJob(id, ({ replicatesDone, phase }) => {
        return phase === 'finishing' || replicatesDone >= progress || performance.now() >= moment;
      });
      expect(over(job)).toBe(false);
      await server.kill();
      await server.start();
    }
    await untilJob(id, ({ phase, state }) => phase === 'finishing' || over({ state } as JobDocument));
    await server.kill();
    await server.start();
    const disturbed = await untilJob(id, over);

    expect(disturbed).toMatchObject({
      state: 'done',
      replicatesDone: replicates,
      resultsDigest: undisturbed.resultsDigest,
      events: undisturbed.events,
      chargedMicrocredits: undisturbed.chargedMicrocredits,
      heldMicrocredits: 0,
    });
    await server.stop();
    await expectSoundBooks(id, undisturbed);
  });
});

/** Every batch settled once, the ledger whole, nothing held. */
async function expectSoundBooks(jobId: string, undisturbed: JobDocument): Promise<void> {
  openDatabase(path.join(folder, 'burette.sqlite'));
  const batches = await Batch.findAll({ where: { jobId } });
  expect(batches.every(({ state }) => state === 'joined')).toBe(true);
  const settlements = await LedgerTransaction.findAll({ where: { jobId, kind: 'settlement' } });
  expect(settlements.map(({ transactionKey }) => transactionKey).sort()).toEqual(
    batches.map(({ id }) => `settle:${id}`).sort(),
  );
  expect(await verifyLedger()).toMatchObject({ ok: true });
  expect(await readBalance(bench.team.id)).toMatchObject({ held: 0, spent: 2 * undisturbed.chargedMicrocredits });
  const [integrity] = await database().query<{ integrity_check: string }>('PRAGMA integrity_check', {
    type: QueryTypes.SELECT,
  });
  expect(integrity?.integrity_check).toBe('ok');
}
