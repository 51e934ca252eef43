/**
 * The only way to write: a queue of one in front of an IMMEDIATE transaction.
 *
 * SQLite has one writer. Contending transactions would time out busy and hold threads while they wait; a queue costs
 * nothing and is fair. Inside, await nothing but the database: no network, no files, no workers.
 */
import { AsyncLocalStorage } from 'node:async_hooks';
import PQueue from 'p-queue';
import { Transaction } from 'sequelize';
import { database } from './connection.ts';

interface WriteContext {
  afterCommit: (() => void)[];
}

const writing = new AsyncLocalStorage<WriteContext>();
const house = globalThis as typeof globalThis & { buretteWriteQueue?: PQueue };
const queue = (house.buretteWriteQueue ??= new PQueue({ concurrency: 1 }));

/** Thrown inside a write transaction to undo it and still answer with a value. */
class RolledBack<T> extends Error {
  constructor(readonly value: T) {
    super('rolled back on purpose');
  }
}

/**
 * Runs `work` in a write transaction; inside another one it joins that one. A thrown error rolls everything back.
 * A returned refusal (`{ ok: false }`) of the outermost call rolls back too: a refused act leaves no trace.
 */
export async function inWriteTransaction<T>(work: () => Promise<T>): Promise<T> {
  if (writing.getStore()) return work();
  const context: WriteContext = { afterCommit: [] };
  const value = await queue.add(() => writing.run(context, () => attempt(work)));
  if (!isRefusal(value)) for (const act of context.afterCommit) act();
  return value as T;
}

async function attempt<T>(work: () => Promise<T>): Promise<T> {
  try {
    return await database().transaction({ type: Transaction.TYPES.IMMEDIATE }, async () => {
      const value = await work();
      if (isRefusal(value)) throw new RolledBack(value);
      return value;
    });
  } catch (error) {
    if (error instanceof RolledBack) return error.value as T;
    throw error;
  }
}

const isRefusal = (value: unknown): boolean =>
  typeof value === 'object' && value !== null && 'ok' in value && (value as { ok: unknown }).ok === false;

/** Registers something to do once the present write transaction has committed (wake a dispatcher); at once outside one. */
export function afterCommit(act: () => void): void {
  const context = writing.getStore();
  if (context) context.afterCommit.push(act);
  else act();
}

/** Waits until every write queued so far has finished (shutdown). */
export const writesFinished = (): Promise<void> => queue.onIdle();
