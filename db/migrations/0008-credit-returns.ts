/** Credits taken back from a purchase, by a refund or a lost dispute, each with its credit note; disputes. */
import type { Migration } from '../migrate.ts';
import { whole } from './guards.ts';

const minor = (name: string) => `${name} INTEGER NOT NULL CHECK (${whole(name)} AND ${name} >= 0)`;

export const creditReturns: Migration = {
  name: '0008-credit-returns',
  statements: [
    `CREATE TABLE creditReturns (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      cause TEXT NOT NULL CHECK (cause IN ('refund', 'dispute')),
      lotId TEXT NOT NULL REFERENCES lots (id),
      invoiceId TEXT NOT NULL REFERENCES invoices (id),
      creditNoteId TEXT NOT NULL UNIQUE REFERENCES invoices (id),
      amountMicrocredits INTEGER NOT NULL CHECK (${whole('amountMicrocredits')} AND amountMicrocredits > 0),
      ${minor('netMinor')},
      ${minor('taxMinor')},
      ${minor('totalMinor')},
      currency TEXT NOT NULL,
      reason TEXT NOT NULL,
      userId TEXT REFERENCES users (id),
      -- pending: the payment service is to be told; by_transfer: we pay by hand; taken: the bank has the money already.
      state TEXT NOT NULL CHECK (state IN ('pending', 'sent', 'failed', 'by_transfer', 'taken')),
      paymentIntentId TEXT,
      -- Of the call that sends the money; stored before it.
      idempotencyKey TEXT NOT NULL UNIQUE,
      serviceRefundId TEXT UNIQUE,
      problem TEXT,
      createdAt TEXT NOT NULL,
      sentAt TEXT,
      CHECK (totalMinor = netMinor + taxMinor),
      CHECK (state <> 'pending' OR paymentIntentId IS NOT NULL)
    )`,
    `CREATE INDEX creditReturnsByLot ON creditReturns (lotId)`,
    `CREATE INDEX creditReturnsByInvoice ON creditReturns (invoiceId)`,
    `CREATE INDEX creditReturnsToSend ON creditReturns (id) WHERE state = 'pending'`,
    `CREATE TRIGGER creditReturnsKeepTheirAmounts BEFORE UPDATE ON creditReturns
     WHEN (NEW.id, NEW.teamId, NEW.cause, NEW.lotId, NEW.invoiceId, NEW.creditNoteId, NEW.amountMicrocredits, NEW.netMinor, NEW.taxMinor, NEW.currency, NEW.idempotencyKey)
       IS NOT (OLD.id, OLD.teamId, OLD.cause, OLD.lotId, OLD.invoiceId, OLD.creditNoteId, OLD.amountMicrocredits, OLD.netMinor, OLD.taxMinor, OLD.currency, OLD.idempotencyKey)
     BEGIN SELECT RAISE(ABORT, 'creditReturns: only the state of sending changes'); END`,
    `CREATE TRIGGER creditReturnsAreNotRemoved BEFORE DELETE ON creditReturns
     BEGIN SELECT RAISE(ABORT, 'creditReturns: rows are never removed'); END`,
  ],
};
