/** Recomputes the ledger from its transactions: chain, sums, balances, lots, segments. */
import { createHash } from 'node:crypto';
import { Op } from 'sequelize';
import { LedgerPosting, LedgerTransaction, Lot, LotDrawRow } from '@db/models/ledger.ts';
import { LedgerReplay, type ReplayRow, type ReplayStart } from '@/domain/ledger/replay.ts';

export type Verification =
  | { ok: true; transactions: number; headHash: string }
  /** The first break: the transaction's place and id, and what is wrong. */
  | { ok: false; sequence: number; transactionId: string | null; fault: string };

const pageSize = 500;
const hashOf = (text: string): string => createHash('sha256').update(text, 'utf8').digest('hex');

/**
 * Reads only. `start` is a checkpoint to go on from; without it everything is recomputed from the first transaction.
 * The accounts of the checkpoint are then taken as their rows state them, so only a full run proves those.
 */
export async function verifyLedger(options: { start?: ReplayStart } = {}): Promise<Verification> {
  const replay = new LedgerReplay(hashOf, options.start);
  for (;;) {
    const after = replay.head.sequence;
    const rows = await LedgerTransaction.findAll({
      where: { sequence: { [Op.gt]: after } },
      order: [['sequence', 'ASC']],
      limit: pageSize,
    });
    if (rows.length === 0) break;
    const derived = await readDerived(after, rows.at(-1)?.sequence ?? after);
    for (const row of rows) {
      const fault = replay.take(row.get() as ReplayRow, derived(row.sequence));
      if (fault) return { ok: false, sequence: row.sequence, transactionId: row.id, fault };
    }
  }
  const { sequence, hash } = replay.head;
  const beyond = { where: { transactionSequence: { [Op.gt]: sequence } } };
  if ((await LedgerPosting.count(beyond)) + (await LotDrawRow.count(beyond)) + (await Lot.count(beyond)) > 0)
    return { ok: false, sequence, transactionId: null, fault: 'there are rows that belong to no transaction' };
  const fault = replay.finish();
  return fault
    ? { ok: false, sequence, transactionId: null, fault }
    : { ok: true, transactions: sequence, headHash: hash };
}

/** The rows made from the transactions in (after, last], by sequence. */
async function readDerived(after: number, last: number) {
  const where = { transactionSequence: { [Op.gt]: after, [Op.lte]: last } };
  const [postings, lots, draws] = await Promise.all([
    LedgerPosting.findAll({ where, raw: true }),
    Lot.findAll({ where, raw: true }),
    LotDrawRow.findAll({ where, raw: true }),
  ]);
  const bySequence = <T extends { transactionSequence: number }>(rows: T[]) => {
    const groups = new Map<number, T[]>();
    for (const row of rows) groups.set(row.transactionSequence, [...(groups.get(row.transactionSequence) ?? []), row]);
    return (sequence: number) => groups.get(sequence) ?? [];
  };
  const of = { postings: bySequence(postings), lots: bySequence(lots), draws: bySequence(draws) };
  return (sequence: number) => ({
    postings: of.postings(sequence),
    lots: of.lots(sequence),
    draws: of.draws(sequence),
  });
}
