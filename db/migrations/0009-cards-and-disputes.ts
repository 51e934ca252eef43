/** Saved cards, automatic top-ups, disputes, and what teams owe after a dispute that was lost. */
import type { Migration } from '../migrate.ts';
import { whole } from './guards.ts';

const amount = (name: string, sign = '>= 0') => `${name} INTEGER NOT NULL CHECK (${whole(name)} AND ${name} ${sign})`;
const currency = `currency TEXT NOT NULL CHECK (length(currency) = 3 AND currency = upper(currency))`;

export const cardsAndDisputes: Migration = {
  name: '0009-cards-and-disputes',
  statements: [
    // A visit to the payment service's page to save a card.
    `CREATE TABLE cardSetups (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      userId TEXT REFERENCES users (id),
      requestKey TEXT UNIQUE,
      state TEXT NOT NULL CHECK (state IN ('pending', 'saved', 'expired')),
      customerId TEXT,
      -- Of the call that opens the page.
      idempotencyKey TEXT NOT NULL UNIQUE,
      sessionId TEXT UNIQUE,
      pageUrl TEXT,
      createdAt TEXT NOT NULL,
      expiresAt TEXT NOT NULL,
      decidedAt TEXT,
      checks INTEGER NOT NULL DEFAULT 0,
      nextCheckAt TEXT
    )`,
    `CREATE INDEX cardSetupsByTeam ON cardSetups (teamId, id)`,
    `CREATE INDEX cardSetupsToCheck ON cardSetups (nextCheckAt) WHERE nextCheckAt IS NOT NULL`,

    // What is shown of a card, never its number; charging it takes the service's id and our key.
    `CREATE TABLE savedCards (
      paymentMethodId TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      setupId TEXT NOT NULL UNIQUE REFERENCES cardSetups (id),
      brand TEXT NOT NULL,
      lastFour TEXT NOT NULL CHECK (lastFour GLOB '[0-9][0-9][0-9][0-9]'),
      expiryMonth INTEGER NOT NULL CHECK (expiryMonth BETWEEN 1 AND 12),
      expiryYear INTEGER NOT NULL CHECK (expiryYear BETWEEN 2000 AND 2999),
      savedAt TEXT NOT NULL,
      savedBy TEXT REFERENCES users (id),
      -- Replaced or removed here; forgottenAt says when the service let go of it too.
      removedAt TEXT,
      -- Of the call that tells the service.
      forgetKey TEXT UNIQUE,
      forgottenAt TEXT,
      CHECK ((removedAt IS NULL) = (forgetKey IS NULL)),
      CHECK (forgottenAt IS NULL OR removedAt IS NOT NULL)
    )`,
    `CREATE UNIQUE INDEX savedCardsOnePerTeam ON savedCards (teamId) WHERE removedAt IS NULL`,
    `CREATE INDEX savedCardsToForget ON savedCards (removedAt) WHERE removedAt IS NOT NULL AND forgottenAt IS NULL`,

    `CREATE TABLE automaticTopUps (
      teamId TEXT PRIMARY KEY REFERENCES teams (id),
      -- stopped: switched off by us, because a payment did not pass.
      state TEXT NOT NULL CHECK (state IN ('on', 'off', 'stopped')),
      ${amount('thresholdMicrocredits', '> 0')},
      pack TEXT NOT NULL,
      ${currency},
      -- Of a calendar month in the team's time zone, tax included.
      ${amount('monthlyCeilingMinor', '> 0')},
      problem TEXT,
      -- The last month in which the ceiling was told by mail.
      ceilingToldMonth TEXT,
      updatedAt TEXT NOT NULL,
      updatedBy TEXT REFERENCES users (id),
      CHECK ((state = 'stopped') = (problem IS NOT NULL))
    )`,
    `ALTER TABLE topUps ADD COLUMN way TEXT NOT NULL DEFAULT 'checkout' CHECK (way IN ('checkout', 'automatic'))`,
    `ALTER TABLE topUps ADD COLUMN paymentMethodId TEXT CHECK (way = 'checkout' OR paymentMethodId IS NOT NULL)`,
    // One on its way, whoever begins it.
    `CREATE UNIQUE INDEX topUpsOneAutomatic ON topUps (teamId) WHERE way = 'automatic' AND state IN ('pending', 'processing')`,
    `CREATE INDEX topUpsAutomatic ON topUps (teamId, createdAt) WHERE way = 'automatic'`,

    `ALTER TABLE paymentEvents ADD COLUMN cardSetupId TEXT`,
    `ALTER TABLE paymentEvents ADD COLUMN disputeId TEXT`,

    `CREATE TABLE disputes (
      -- The payment service's id.
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      topUpId TEXT NOT NULL REFERENCES topUps (id),
      invoiceId TEXT NOT NULL REFERENCES invoices (id),
      lotId TEXT NOT NULL REFERENCES lots (id),
      state TEXT NOT NULL CHECK (state IN ('open', 'won', 'lost')),
      reason TEXT NOT NULL,
      -- What the bank takes, tax included, and the credits that it paid for.
      ${amount('totalMinor', '> 0')},
      ${currency},
      ${amount('coveredMicrocredits')},
      ${amount('frozenMicrocredits')},
      ${amount('takenMicrocredits')},
      openedAt TEXT NOT NULL,
      decidedAt TEXT,
      -- What an operator has to look at.
      problem TEXT,
      checks INTEGER NOT NULL DEFAULT 0,
      nextCheckAt TEXT,
      CHECK (frozenMicrocredits + takenMicrocredits <= coveredMicrocredits),
      CHECK ((state = 'open') = (decidedAt IS NULL)),
      CHECK (state = 'open' OR frozenMicrocredits = 0),
      CHECK (state = 'lost' OR takenMicrocredits = 0)
    )`,
    `CREATE INDEX disputesByTeam ON disputes (teamId, id)`,
    `CREATE INDEX disputesByInvoice ON disputes (invoiceId)`,
    `CREATE INDEX disputesToCheck ON disputes (nextCheckAt) WHERE nextCheckAt IS NOT NULL`,
    `CREATE TRIGGER disputesStayDecided BEFORE UPDATE ON disputes
     WHEN (OLD.state <> 'open' AND (NEW.state, NEW.decidedAt) IS NOT (OLD.state, OLD.decidedAt))
       OR (NEW.id, NEW.teamId, NEW.topUpId, NEW.invoiceId, NEW.lotId, NEW.totalMinor, NEW.currency, NEW.coveredMicrocredits)
       IS NOT (OLD.id, OLD.teamId, OLD.topUpId, OLD.invoiceId, OLD.lotId, OLD.totalMinor, OLD.currency, OLD.coveredMicrocredits)
     BEGIN SELECT RAISE(ABORT, 'disputes: a decision and the facts of a dispute stay'); END`,
    `CREATE TRIGGER disputesAreNotRemoved BEFORE DELETE ON disputes
     BEGIN SELECT RAISE(ABORT, 'disputes: rows are never removed'); END`,

    // What was spent of a payment that the bank took back: launching waits until it is settled or written off.
    `CREATE TABLE receivables (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      disputeId TEXT NOT NULL UNIQUE REFERENCES disputes (id),
      invoiceId TEXT NOT NULL REFERENCES invoices (id),
      -- Falls while running jobs give credits back.
      ${amount('totalMinor')},
      ${currency},
      state TEXT NOT NULL CHECK (state IN ('open', 'settled', 'written_off')),
      createdAt TEXT NOT NULL,
      decidedAt TEXT,
      decidedBy TEXT REFERENCES users (id),
      reason TEXT,
      CHECK ((state = 'open') = (decidedAt IS NULL)),
      CHECK ((state = 'open') = (reason IS NULL)),
      CHECK (state <> 'open' OR totalMinor > 0)
    )`,
    `CREATE INDEX receivablesOpen ON receivables (teamId) WHERE state = 'open'`,
    `CREATE TRIGGER receivablesStayDecided BEFORE UPDATE ON receivables
     WHEN OLD.state <> 'open' OR NEW.totalMinor > OLD.totalMinor
       OR (NEW.id, NEW.teamId, NEW.disputeId, NEW.invoiceId, NEW.currency, NEW.createdAt)
       IS NOT (OLD.id, OLD.teamId, OLD.disputeId, OLD.invoiceId, OLD.currency, OLD.createdAt)
     BEGIN SELECT RAISE(ABORT, 'receivables: only an open one changes, and it never grows'); END`,
    `CREATE TRIGGER receivablesAreNotRemoved BEFORE DELETE ON receivables
     BEGIN SELECT RAISE(ABORT, 'receivables: rows are never removed'); END`,
  ],
};
