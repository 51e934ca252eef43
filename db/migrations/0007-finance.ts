/** Budgets, messages about invoices, the record of operators' acts, and what statements read quickly. */
import type { Migration } from '../migrate.ts';
import { appendOnly, whole } from './guards.ts';

const optionalAmount = (name: string) => `${name} INTEGER CHECK (${name} IS NULL OR (${whole(name)} AND ${name} > 0))`;

export const finance: Migration = {
  name: '0007-finance',
  statements: [
    // Budgets count a launch in its month: the holds of a month are found without its settlements.
    `CREATE INDEX ledgerTransactionsHolds ON ledgerTransactions (teamId, occurredAt, segmentId) WHERE kind = 'hold'`,
    `CREATE INDEX ledgerTransactionsByKind ON ledgerTransactions (teamId, kind, sequence)`,
    `CREATE INDEX lotDrawsByTransaction ON lotDraws (transactionSequence, lotId, amountMicrocredits)`,
    `CREATE INDEX jobsByProjectCode ON jobs (projectCodeId, id) WHERE projectCodeId IS NOT NULL`,

    `CREATE TABLE teamBudgets (
      teamId TEXT PRIMARY KEY REFERENCES teams (id),
      ${optionalAmount('monthlyMicrocredits')},
      -- A mail goes out when less than this is available.
      ${optionalAmount('lowBalanceMicrocredits')},
      updatedAt TEXT NOT NULL,
      updatedBy TEXT REFERENCES users (id)
    )`,
    `CREATE TABLE projectCodeBudgets (
      projectCodeId TEXT PRIMARY KEY REFERENCES projectCodes (id),
      ${optionalAmount('monthlyMicrocredits')},
      updatedAt TEXT NOT NULL,
      updatedBy TEXT REFERENCES users (id)
    )`,
    // Which alerts have gone out: each once per team (and project code) and month.
    `CREATE TABLE budgetAlerts (
      teamId TEXT NOT NULL REFERENCES teams (id),
      month TEXT NOT NULL,
      -- 'low_balance', 'budget:80' or 'budget:80:<project code id>'.
      alert TEXT NOT NULL,
      at TEXT NOT NULL,
      PRIMARY KEY (teamId, month, alert)
    ) WITHOUT ROWID`,

    `CREATE TABLE invoiceMessages (
      id TEXT PRIMARY KEY,
      invoiceId TEXT NOT NULL REFERENCES invoices (id),
      side TEXT NOT NULL CHECK (side IN ('team', 'operator')),
      userId TEXT REFERENCES users (id),
      body TEXT NOT NULL CHECK (length(body) BETWEEN 1 AND 2000),
      at TEXT NOT NULL
    )`,
    `CREATE INDEX invoiceMessagesByInvoice ON invoiceMessages (invoiceId, id)`,
    ...appendOnly('invoiceMessages'),

    // Every act of an operator, written in the transaction of the act.
    `CREATE TABLE operatorActs (
      id TEXT PRIMARY KEY,
      at TEXT NOT NULL,
      userId TEXT REFERENCES users (id),
      act TEXT NOT NULL,
      teamId TEXT REFERENCES teams (id),
      subjectId TEXT,
      details TEXT NOT NULL CHECK (json_type(details) = 'object')
    )`,
    `CREATE INDEX operatorActsByTeam ON operatorActs (teamId, id) WHERE teamId IS NOT NULL`,
    ...appendOnly('operatorActs'),

    // A price holds from its start on, so a version cannot start in the past of its making, whoever inserts it.
    `CREATE TRIGGER priceBooksStartLater BEFORE INSERT ON priceBooks
     WHEN NEW.startsAt <= NEW.createdAt OR NEW.version IS NOT 1 + (SELECT max(version) FROM priceBooks)
     BEGIN SELECT RAISE(ABORT, 'priceBooks: a version is the next one and starts after it was made'); END`,
  ],
};
