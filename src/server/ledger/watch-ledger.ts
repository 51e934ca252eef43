/** Verifies the ledger beside the requests: from the last checkpoint at boot, in full at night. A break is logged loudly. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { LedgerCheckpoint, LedgerTransaction } from '@db/models/ledger.ts';
import type { ReplayStart } from '@/domain/ledger/replay.ts';
import { nowText } from '../clock.ts';
import { log } from '../log.ts';
import { verifyLedger, type Verification } from './verify-ledger.ts';

const house = globalThis as typeof globalThis & { buretteLedger?: 'whole' | 'broken' };

/** What the last verification of this process found. */
export const ledgerStanding = (): 'whole' | 'broken' | 'unknown' => house.buretteLedger ?? 'unknown';

/** Answers what was found and, when the ledger is whole, remembers how far. */
export async function watchLedger(options: { full: boolean }): Promise<Verification> {
  const start = options.full ? undefined : await readCheckpoint();
  const found = await verifyLedger(start ? { start } : {});
  house.buretteLedger = found.ok ? 'whole' : 'broken';
  if (!found.ok) {
    log().fatal({ ...found }, 'THE LEDGER IS BROKEN: stop selling and look at this transaction');
    return found;
  }
  if (found.transactions > (start?.sequence ?? 0))
    await inWriteTransaction(() =>
      LedgerCheckpoint.create({ id: null, sequence: found.transactions, hash: found.headHash, verifiedAt: nowText() }),
    );
  log().info({ transactions: found.transactions, from: start?.sequence ?? 0 }, 'ledger verified');
  return found;
}

/** Undefined when there is none, or when the transaction it names is not the one it saw: then everything is recomputed. */
async function readCheckpoint(): Promise<ReplayStart | undefined> {
  const checkpoint = await LedgerCheckpoint.findOne({ order: [['id', 'DESC']] });
  if (!checkpoint) return undefined;
  const { sequence, hash } = checkpoint;
  const row = await LedgerTransaction.findByPk(sequence, { attributes: ['hash'] });
  if (row?.hash !== hash) return undefined;
  const select = <T extends object>(sql: string) =>
    database().query<T>(sql, { type: QueryTypes.SELECT, bind: { sequence } });
  return {
    sequence,
    hash,
    balances: await select(
      `SELECT teamId, account, balanceMicrocredits, max(transactionSequence) FROM ledgerPostings
       WHERE transactionSequence <= $sequence GROUP BY teamId, account`,
    ),
    lots: await select(
      `SELECT id, teamId,
         coalesce((SELECT remainingMicrocredits FROM lotDraws WHERE lotId = lots.id AND transactionSequence <= $sequence
                   ORDER BY transactionSequence DESC LIMIT 1), creditsMicrocredits) AS remainingMicrocredits,
         coalesce((SELECT frozenMicrocredits FROM lotDraws WHERE lotId = lots.id AND transactionSequence <= $sequence
                   ORDER BY transactionSequence DESC LIMIT 1), 0) AS frozenMicrocredits
       FROM lots WHERE transactionSequence <= $sequence`,
    ),
    segments: await select(
      `SELECT segmentId, teamId, jobId, segmentHeldMicrocredits AS held, segmentSpentMicrocredits AS spent, max(sequence)
       FROM ledgerTransactions WHERE segmentId IS NOT NULL AND sequence <= $sequence GROUP BY segmentId`,
    ),
  };
}
