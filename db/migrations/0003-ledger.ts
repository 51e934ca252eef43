/**
 * Ledger transactions, postings, lots and draws with the triggers that guard them, and price books.
 *
 * A transaction row carries its postings, lots and draws as JSON; one trigger expands them. The rows made from it are
 * accepted only when they repeat what the transaction says, so nothing can be added beside it, and nothing is ever
 * changed or removed (recursive_triggers is on, so that INSERT OR REPLACE meets the DELETE triggers too).
 */
import type { Migration } from '../migrate.ts';
import { appendOnly, whole } from './guards.ts';

const holdings = `'available', 'held', 'frozen', 'spent', 'returned'`;
const sources = `'bought', 'granted', 'earned'`;

/** Σ of one field of a JSON list of the new transaction for the team at hand. */
const sumOf = (list: string, where = '1', field = 'amountMicrocredits') => `(
  SELECT coalesce(sum(item.value ->> '${field}'), 0) FROM json_each(NEW.${list}) AS item
  WHERE item.value ->> 'teamId' = team.id AND ${where})`;

export const ledger: Migration = {
  name: '0003-ledger',
  statements: [
    `CREATE TABLE ledgerTransactions (
      sequence INTEGER PRIMARY KEY,
      id TEXT NOT NULL UNIQUE,
      -- Deterministic, such as settle:<settlementId>: a repeated act collides here.
      transactionKey TEXT NOT NULL UNIQUE,
      kind TEXT NOT NULL CHECK (kind IN ('grant', 'top_up', 'hold', 'release', 'settlement', 'refund',
        'dispute_opened', 'dispute_won', 'dispute_lost')),
      occurredAt TEXT NOT NULL,
      teamId TEXT NOT NULL REFERENCES teams (id),
      jobId TEXT,
      segmentId TEXT,
      userId TEXT REFERENCES users (id),
      -- Running totals of the charge segment after this transaction.
      segmentHeldMicrocredits INTEGER CHECK (segmentHeldMicrocredits IS NULL OR (${whole('segmentHeldMicrocredits')} AND segmentHeldMicrocredits >= 0)),
      segmentSpentMicrocredits INTEGER CHECK (segmentSpentMicrocredits IS NULL OR (${whole('segmentSpentMicrocredits')} AND segmentSpentMicrocredits >= 0)),
      postings TEXT NOT NULL CHECK (json_type(postings) = 'array'),
      lots TEXT NOT NULL CHECK (json_type(lots) = 'array'),
      draws TEXT NOT NULL CHECK (json_type(draws) = 'array'),
      memo TEXT NOT NULL CHECK (json_type(memo) = 'object'),
      previousHash TEXT NOT NULL CHECK (length(previousHash) = 64),
      hash TEXT NOT NULL UNIQUE CHECK (length(hash) = 64),
      CHECK ((segmentId IS NULL) = (segmentHeldMicrocredits IS NULL)),
      CHECK ((segmentId IS NULL) = (segmentSpentMicrocredits IS NULL)),
      CHECK ((kind IN ('hold', 'release', 'settlement')) = (segmentId IS NOT NULL))
    )`,
    `CREATE INDEX ledgerTransactionsBySegment ON ledgerTransactions (segmentId, sequence) WHERE segmentId IS NOT NULL`,
    `CREATE INDEX ledgerTransactionsByJob ON ledgerTransactions (jobId, sequence) WHERE jobId IS NOT NULL`,
    `CREATE INDEX ledgerTransactionsByTime ON ledgerTransactions (teamId, occurredAt, sequence)`,
    `CREATE INDEX ledgerTransactionsByTeam ON ledgerTransactions (teamId, sequence)`,

    `CREATE TABLE ledgerPostings (
      transactionSequence INTEGER NOT NULL REFERENCES ledgerTransactions (sequence),
      teamId TEXT NOT NULL REFERENCES teams (id),
      account TEXT NOT NULL CHECK (account IN (${holdings}, ${sources})),
      amountMicrocredits INTEGER NOT NULL CHECK (${whole('amountMicrocredits')} AND amountMicrocredits <> 0),
      -- Of this account, after this posting. Holdings never fall below zero, sources never rise above it.
      balanceMicrocredits INTEGER NOT NULL CHECK (${whole('balanceMicrocredits')}),
      PRIMARY KEY (transactionSequence, teamId, account),
      CHECK (account NOT IN (${holdings}) OR balanceMicrocredits >= 0),
      CHECK (account NOT IN (${sources}) OR balanceMicrocredits <= 0)
    ) WITHOUT ROWID`,
    `CREATE INDEX ledgerPostingsByAccount ON ledgerPostings (teamId, account, transactionSequence, balanceMicrocredits, amountMicrocredits)`,

    `CREATE TABLE lots (
      id TEXT PRIMARY KEY,
      transactionSequence INTEGER NOT NULL REFERENCES ledgerTransactions (sequence),
      teamId TEXT NOT NULL REFERENCES teams (id),
      source TEXT NOT NULL CHECK (source IN ('grant', 'royalty', 'bought')),
      creditsMicrocredits INTEGER NOT NULL CHECK (${whole('creditsMicrocredits')} AND creditsMicrocredits > 0),
      netMinor INTEGER NOT NULL CHECK (${whole('netMinor')} AND netMinor >= 0),
      currency TEXT CHECK (currency IS NULL OR length(currency) = 3),
      purchaseId TEXT,
      CHECK ((source = 'grant') = (currency IS NULL)),
      CHECK (source <> 'grant' OR netMinor = 0)
    )`,
    `CREATE INDEX lotsByTeam ON lots (teamId, transactionSequence)`,
    `CREATE UNIQUE INDEX lotsByPurchase ON lots (purchaseId) WHERE purchaseId IS NOT NULL`,

    // What transactions took from lots, froze of them or set free.
    `CREATE TABLE lotDraws (
      lotId TEXT NOT NULL REFERENCES lots (id),
      transactionSequence INTEGER NOT NULL REFERENCES ledgerTransactions (sequence),
      amountMicrocredits INTEGER NOT NULL CHECK (${whole('amountMicrocredits')} AND amountMicrocredits >= 0),
      -- Of the lot, after this draw.
      remainingMicrocredits INTEGER NOT NULL CHECK (${whole('remainingMicrocredits')} AND remainingMicrocredits >= 0),
      frozenChangeMicrocredits INTEGER NOT NULL CHECK (${whole('frozenChangeMicrocredits')}),
      -- What of the rest is frozen, after this draw.
      frozenMicrocredits INTEGER NOT NULL CHECK (${whole('frozenMicrocredits')} AND frozenMicrocredits BETWEEN 0 AND remainingMicrocredits),
      PRIMARY KEY (lotId, transactionSequence)
    ) WITHOUT ROWID`,

    // The chain has one head and no gap.
    `CREATE TRIGGER ledgerTransactionsFollow BEFORE INSERT ON ledgerTransactions
     WHEN NEW.sequence IS NOT (SELECT coalesce(max(sequence), 0) + 1 FROM ledgerTransactions)
       OR NEW.previousHash IS NOT coalesce(
         (SELECT hash FROM ledgerTransactions ORDER BY sequence DESC LIMIT 1), '${'0'.repeat(64)}')
     BEGIN SELECT RAISE(ABORT, 'ledger: a transaction must follow the head of the chain'); END`,

    `CREATE TRIGGER ledgerTransactionsKeepSegments BEFORE INSERT ON ledgerTransactions
     WHEN NEW.segmentId IS NOT NULL AND (
       NEW.segmentHeldMicrocredits IS NOT
         coalesce((SELECT segmentHeldMicrocredits FROM ledgerTransactions WHERE segmentId = NEW.segmentId ORDER BY sequence DESC LIMIT 1), 0)
         + (SELECT coalesce(sum(item.value ->> 'amountMicrocredits'), 0) FROM json_each(NEW.postings) AS item WHERE item.value ->> 'account' = 'held' AND item.value ->> 'teamId' = NEW.teamId)
       OR NEW.segmentSpentMicrocredits IS NOT
         coalesce((SELECT segmentSpentMicrocredits FROM ledgerTransactions WHERE segmentId = NEW.segmentId ORDER BY sequence DESC LIMIT 1), 0)
         + (SELECT coalesce(sum(item.value ->> 'amountMicrocredits'), 0) FROM json_each(NEW.postings) AS item WHERE item.value ->> 'account' = 'spent' AND item.value ->> 'teamId' = NEW.teamId)
       OR EXISTS (SELECT 1 FROM ledgerTransactions WHERE segmentId = NEW.segmentId AND (teamId IS NOT NEW.teamId OR jobId IS NOT NEW.jobId)))
     BEGIN SELECT RAISE(ABORT, 'ledger: the running totals of the segment do not follow'); END`,

    `CREATE TRIGGER ledgerTransactionsExpand AFTER INSERT ON ledgerTransactions
     BEGIN
       SELECT RAISE(ABORT, 'ledger: every posting, lot and draw is an integer amount')
       WHERE EXISTS (SELECT 1 FROM json_each(NEW.postings) AS item WHERE json_type(item.value, '$.amountMicrocredits') IS NOT 'integer')
          OR EXISTS (SELECT 1 FROM json_each(NEW.draws) AS item WHERE json_type(item.value, '$.amountMicrocredits') IS NOT 'integer'
               OR json_type(item.value, '$.remainingMicrocredits') IS NOT 'integer'
               OR json_type(item.value, '$.frozenChangeMicrocredits') IS NOT 'integer'
               OR json_type(item.value, '$.frozenMicrocredits') IS NOT 'integer')
          OR EXISTS (SELECT 1 FROM json_each(NEW.lots) AS item WHERE json_type(item.value, '$.creditsMicrocredits') IS NOT 'integer'
               OR json_type(item.value, '$.netMinor') IS NOT 'integer');
       SELECT RAISE(ABORT, 'ledger: the postings of a team must sum to zero')
       FROM (SELECT DISTINCT item.value ->> 'teamId' AS id FROM json_each(NEW.postings) AS item) AS team
       WHERE ${sumOf('postings')} <> 0;
       SELECT RAISE(ABORT, 'ledger: lots must be issued for exactly what the sources give')
       FROM (SELECT item.value ->> 'teamId' AS id FROM json_each(NEW.postings) AS item
             UNION SELECT item.value ->> 'teamId' FROM json_each(NEW.lots) AS item) AS team
       WHERE -${sumOf('postings', `item.value ->> 'account' IN (${sources})`)} <> (
         SELECT coalesce(sum(item.value ->> 'creditsMicrocredits'), 0) FROM json_each(NEW.lots) AS item
         WHERE item.value ->> 'teamId' = team.id);
       SELECT RAISE(ABORT, 'ledger: lots must be drawn or frozen for exactly what is spent, returned or frozen')
       FROM (SELECT item.value ->> 'teamId' AS id FROM json_each(NEW.postings) AS item
             UNION SELECT item.value ->> 'teamId' FROM json_each(NEW.draws) AS item) AS team
       WHERE ${sumOf('postings', `item.value ->> 'account' IN ('spent', 'returned')`)} <> ${sumOf('draws')}
          OR ${sumOf('postings', `item.value ->> 'account' = 'frozen'`)} <> ${sumOf('draws', '1', 'frozenChangeMicrocredits')};
       INSERT INTO ledgerPostings (transactionSequence, teamId, account, amountMicrocredits, balanceMicrocredits)
       SELECT NEW.sequence, item.value ->> 'teamId', item.value ->> 'account', item.value ->> 'amountMicrocredits',
         (item.value ->> 'amountMicrocredits') + coalesce((
           SELECT earlier.balanceMicrocredits FROM ledgerPostings AS earlier
           WHERE earlier.teamId = item.value ->> 'teamId' AND earlier.account = item.value ->> 'account'
           ORDER BY earlier.transactionSequence DESC LIMIT 1), 0)
       FROM json_each(NEW.postings) AS item;
       INSERT INTO lots (id, transactionSequence, teamId, source, creditsMicrocredits, netMinor, currency, purchaseId)
       SELECT item.value ->> 'id', NEW.sequence, item.value ->> 'teamId', item.value ->> 'source',
         item.value ->> 'creditsMicrocredits', item.value ->> 'netMinor', item.value ->> 'currency', item.value ->> 'purchaseId'
       FROM json_each(NEW.lots) AS item;
       INSERT INTO lotDraws (lotId, transactionSequence, amountMicrocredits, remainingMicrocredits, frozenChangeMicrocredits, frozenMicrocredits)
       SELECT item.value ->> 'lotId', NEW.sequence, item.value ->> 'amountMicrocredits', item.value ->> 'remainingMicrocredits',
         item.value ->> 'frozenChangeMicrocredits', item.value ->> 'frozenMicrocredits'
       FROM json_each(NEW.draws) AS item;
     END`,

    `CREATE TRIGGER ledgerPostingsRepeat BEFORE INSERT ON ledgerPostings
     WHEN NOT EXISTS (
         SELECT 1 FROM ledgerTransactions AS own, json_each(own.postings) AS item
         WHERE own.sequence = NEW.transactionSequence AND item.value ->> 'teamId' = NEW.teamId
           AND item.value ->> 'account' = NEW.account AND item.value ->> 'amountMicrocredits' = NEW.amountMicrocredits)
       OR NEW.balanceMicrocredits IS NOT NEW.amountMicrocredits + coalesce((
         SELECT balanceMicrocredits FROM ledgerPostings WHERE teamId = NEW.teamId AND account = NEW.account
         ORDER BY transactionSequence DESC LIMIT 1), 0)
     BEGIN SELECT RAISE(ABORT, 'ledger: postings come only from their transaction'); END`,
    `CREATE TRIGGER lotsRepeat BEFORE INSERT ON lots
     WHEN NOT EXISTS (
       SELECT 1 FROM ledgerTransactions AS own, json_each(own.lots) AS item
       WHERE own.sequence = NEW.transactionSequence AND item.value ->> 'id' = NEW.id
         AND item.value ->> 'creditsMicrocredits' = NEW.creditsMicrocredits)
     BEGIN SELECT RAISE(ABORT, 'ledger: lots come only from their transaction'); END`,
    `CREATE TRIGGER lotDrawsRepeat BEFORE INSERT ON lotDraws
     WHEN NOT EXISTS (
         SELECT 1 FROM ledgerTransactions AS own, json_each(own.draws) AS item JOIN lots ON lots.id = NEW.lotId
         WHERE own.sequence = NEW.transactionSequence AND item.value ->> 'lotId' = NEW.lotId
           AND item.value ->> 'teamId' = lots.teamId AND item.value ->> 'amountMicrocredits' = NEW.amountMicrocredits
           AND item.value ->> 'frozenChangeMicrocredits' = NEW.frozenChangeMicrocredits)
       OR NEW.remainingMicrocredits IS NOT coalesce(
         (SELECT remainingMicrocredits FROM lotDraws WHERE lotId = NEW.lotId ORDER BY transactionSequence DESC LIMIT 1),
         (SELECT creditsMicrocredits FROM lots WHERE id = NEW.lotId)) - NEW.amountMicrocredits
       OR NEW.frozenMicrocredits IS NOT NEW.frozenChangeMicrocredits + coalesce(
         (SELECT frozenMicrocredits FROM lotDraws WHERE lotId = NEW.lotId ORDER BY transactionSequence DESC LIMIT 1), 0)
     BEGIN SELECT RAISE(ABORT, 'ledger: draws come only from their transaction and leave what they say'); END`,
    ...['ledgerTransactions', 'ledgerPostings', 'lots', 'lotDraws'].flatMap(appendOnly),

    `CREATE TABLE ledgerCheckpoints (
      id INTEGER PRIMARY KEY,
      sequence INTEGER NOT NULL,
      hash TEXT NOT NULL,
      verifiedAt TEXT NOT NULL
    )`,
    ...appendOnly('ledgerCheckpoints'),

    `CREATE TABLE priceBooks (
      id TEXT PRIMARY KEY,
      version INTEGER NOT NULL UNIQUE,
      startsAt TEXT NOT NULL,
      microcreditsPerMillionEvents TEXT NOT NULL CHECK (json_type(microcreditsPerMillionEvents) = 'object'),
      packs TEXT NOT NULL CHECK (json_type(packs) = 'array'),
      createdAt TEXT NOT NULL
    )`,
    ...appendOnly('priceBooks'),
    `INSERT INTO priceBooks (id, version, startsAt, microcreditsPerMillionEvents, packs, createdAt) VALUES (
      'pricebook_1', 1, '2026-01-01T00:00:00.000Z',
      '${JSON.stringify({
        steady: { exact: 1_000_000, leap: 1_500_000 },
        express: { exact: 1_600_000, leap: 2_400_000 },
        overnight: { exact: 600_000, leap: 900_000 },
      })}',
      '${JSON.stringify([
        { id: '25', credits: 25, netMinor: { EUR: 2_500, GBP: 2_200, USD: 2_700 } },
        { id: '100', credits: 100, netMinor: { EUR: 9_500, GBP: 8_300, USD: 10_300 } },
        { id: '500', credits: 500, netMinor: { EUR: 45_000, GBP: 39_500, USD: 48_500 } },
        { id: '2000', credits: 2_000, netMinor: { EUR: 170_000, GBP: 149_000, USD: 184_000 } },
      ])}',
      '2026-01-01T00:00:00.000Z')`,
  ],
};
