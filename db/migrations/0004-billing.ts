/** Billing details, top-ups, payment events, invoices, pro-formas, tax and exchange rates. */
import { exchangeRates, standardRates } from '@/domain/billing/standard-rates.ts';
import type { Migration } from '../migrate.ts';
import { appendOnly, whole } from './guards.ts';

const minor = (name: string, sign = '>= 0') => `${name} INTEGER NOT NULL CHECK (${whole(name)} AND ${name} ${sign})`;
const json = (name: string, type: 'array' | 'object') => `${name} TEXT NOT NULL CHECK (json_type(${name}) = '${type}')`;
const currency = `currency TEXT NOT NULL CHECK (length(currency) = 3 AND currency = upper(currency))`;

/** A number series without gaps: each number follows the last of its series and year, whoever inserts. */
const gapless = (table: string) =>
  `CREATE TRIGGER ${table}NumbersFollow BEFORE INSERT ON ${table}
   WHEN NEW.numberInYear IS NOT 1 + (SELECT coalesce(max(numberInYear), 0) FROM ${table} WHERE series = NEW.series AND year = NEW.year)
   BEGIN SELECT RAISE(ABORT, '${table}: numbers follow each other without a gap'); END`;

/** Everything on the face of an invoice or a pro-forma, frozen when it is issued. */
const face = `
  series TEXT NOT NULL,
  year INTEGER NOT NULL,
  numberInYear INTEGER NOT NULL,
  number TEXT NOT NULL UNIQUE,
  teamId TEXT NOT NULL REFERENCES teams (id),
  issuedAt TEXT NOT NULL,
  ${currency},
  ${minor('netMinor')},
  ${minor('taxMinor')},
  ${minor('totalMinor')},
  ${minor('creditsMicrocredits')},
  ${json('seller', 'object')},
  ${json('buyer', 'object')},
  ${json('lines', 'array')},
  ${json('taxes', 'array')},
  ${json('notes', 'array')},
  purchaseOrder TEXT`;
const faceRules = `
  UNIQUE (series, year, numberInYear),
  CHECK (totalMinor = netMinor + taxMinor)`;

export const billing: Migration = {
  name: '0004-billing',
  statements: [
    `CREATE TABLE billingDetails (
      teamId TEXT PRIMARY KEY REFERENCES teams (id),
      name TEXT NOT NULL,
      address TEXT NOT NULL,
      country TEXT NOT NULL CHECK (length(country) = 2),
      vatNumber TEXT,
      email TEXT,
      updatedAt TEXT NOT NULL,
      updatedBy TEXT REFERENCES users (id)
    )`,

    `CREATE TABLE paymentCustomers (
      teamId TEXT PRIMARY KEY REFERENCES teams (id),
      -- Stored before the call that makes the customer, so that a repeated call makes no second one.
      idempotencyKey TEXT NOT NULL UNIQUE,
      customerId TEXT UNIQUE,
      createdAt TEXT NOT NULL
    )`,

    `CREATE TABLE topUps (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      userId TEXT REFERENCES users (id),
      -- The caller's Idempotency-Key with its scope: a double click finds its first top-up here.
      requestKey TEXT UNIQUE,
      state TEXT NOT NULL CHECK (state IN ('pending', 'processing', 'paid', 'failed', 'expired')),
      pack TEXT NOT NULL,
      priceBookId TEXT NOT NULL REFERENCES priceBooks (id),
      ${minor('creditsMicrocredits', '> 0')},
      ${currency},
      ${minor('netMinor', '> 0')},
      ${minor('taxMinor')},
      ${minor('totalMinor', '> 0')},
      ${json('tax', 'object')},
      ${json('buyer', 'object')},
      customerId TEXT,
      -- Of the call that opens the checkout.
      idempotencyKey TEXT NOT NULL UNIQUE,
      sessionId TEXT UNIQUE,
      checkoutUrl TEXT,
      paymentIntentId TEXT UNIQUE,
      problem TEXT,
      createdAt TEXT NOT NULL,
      expiresAt TEXT NOT NULL,
      paidAt TEXT,
      checks INTEGER NOT NULL DEFAULT 0,
      nextCheckAt TEXT,
      CHECK (totalMinor = netMinor + taxMinor),
      CHECK ((state = 'paid') = (paidAt IS NOT NULL)),
      CHECK (state <> 'paid' OR paymentIntentId IS NOT NULL)
    )`,
    `CREATE INDEX topUpsByTeam ON topUps (teamId, id)`,
    `CREATE INDEX topUpsToCheck ON topUps (nextCheckAt) WHERE nextCheckAt IS NOT NULL`,
    `CREATE TRIGGER topUpsStayPaid BEFORE UPDATE ON topUps WHEN OLD.state = 'paid' AND
       (NEW.state, NEW.paidAt, NEW.paymentIntentId, NEW.totalMinor, NEW.currency, NEW.creditsMicrocredits, NEW.teamId)
       IS NOT (OLD.state, OLD.paidAt, OLD.paymentIntentId, OLD.totalMinor, OLD.currency, OLD.creditsMicrocredits, OLD.teamId)
     BEGIN SELECT RAISE(ABORT, 'topUps: what is paid stays as it is'); END`,

    `CREATE TABLE paymentEvents (
      id TEXT PRIMARY KEY,
      type TEXT NOT NULL,
      objectId TEXT,
      topUpId TEXT,
      receivedAt TEXT NOT NULL,
      state TEXT NOT NULL CHECK (state IN ('recorded', 'handled', 'ignored')),
      outcome TEXT,
      attempts INTEGER NOT NULL DEFAULT 0
    )`,
    `CREATE INDEX paymentEventsOpen ON paymentEvents (receivedAt) WHERE state = 'recorded'`,

    `CREATE TABLE invoices (
      id TEXT PRIMARY KEY,
      kind TEXT NOT NULL CHECK (kind IN ('invoice', 'credit_note')),
      ${face},
      taxPoint TEXT NOT NULL,
      paidAt TEXT NOT NULL,
      -- The top-up or pro-forma that was paid: one invoice each.
      topUpId TEXT UNIQUE REFERENCES topUps (id),
      proFormaId TEXT UNIQUE REFERENCES proFormas (id),
      -- The invoice that a credit note corrects.
      correctsInvoiceId TEXT REFERENCES invoices (id),
      CHECK ((kind = 'credit_note') = (correctsInvoiceId IS NOT NULL)),
      ${faceRules}
    )`,
    `CREATE INDEX invoicesByTeam ON invoices (teamId, id)`,
    gapless('invoices'),
    ...appendOnly('invoices'),

    `CREATE TABLE invoiceReceipts (
      invoiceId TEXT PRIMARY KEY REFERENCES invoices (id),
      queuedAt TEXT NOT NULL
    )`,

    `CREATE TABLE invoiceReviews (
      id TEXT PRIMARY KEY,
      invoiceId TEXT NOT NULL REFERENCES invoices (id),
      userId TEXT REFERENCES users (id),
      state TEXT NOT NULL CHECK (state IN ('to_review', 'questioned', 'approved')),
      comment TEXT NOT NULL,
      at TEXT NOT NULL
    )`,
    `CREATE INDEX invoiceReviewsByInvoice ON invoiceReviews (invoiceId, id)`,
    ...appendOnly('invoiceReviews'),

    `CREATE TABLE proFormas (
      id TEXT PRIMARY KEY,
      ${face},
      state TEXT NOT NULL CHECK (state IN ('open', 'paid', 'expired', 'cancelled')),
      userId TEXT REFERENCES users (id),
      pack TEXT NOT NULL,
      priceBookId TEXT NOT NULL REFERENCES priceBooks (id),
      tax TEXT NOT NULL CHECK (json_type(tax) = 'object'),
      termsDays INTEGER NOT NULL,
      dueAt TEXT NOT NULL,
      decidedAt TEXT,
      ${faceRules}
    )`,
    `CREATE INDEX proFormasByTeam ON proFormas (teamId, id)`,
    gapless('proFormas'),
    `CREATE TRIGGER proFormasChangeOnlyState BEFORE UPDATE ON proFormas
     WHEN OLD.state <> 'open' OR (NEW.id, NEW.number, NEW.series, NEW.year, NEW.numberInYear, NEW.teamId, NEW.issuedAt, NEW.currency, NEW.netMinor, NEW.taxMinor,
         NEW.creditsMicrocredits, NEW.seller, NEW.buyer, NEW.lines, NEW.taxes, NEW.notes, NEW.purchaseOrder, NEW.dueAt)
       IS NOT (OLD.id, OLD.number, OLD.series, OLD.year, OLD.numberInYear, OLD.teamId, OLD.issuedAt, OLD.currency, OLD.netMinor, OLD.taxMinor,
         OLD.creditsMicrocredits, OLD.seller, OLD.buyer, OLD.lines, OLD.taxes, OLD.notes, OLD.purchaseOrder, OLD.dueAt)
     BEGIN SELECT RAISE(ABORT, 'proFormas: only an open one changes, and only its state'); END`,
    `CREATE TRIGGER proFormasAreNotRemoved BEFORE DELETE ON proFormas
     BEGIN SELECT RAISE(ABORT, 'proFormas: rows are never removed'); END`,

    // Configuration that ships with the product; corrected by adding rows with later dates.
    `CREATE TABLE taxRates (
      country TEXT NOT NULL CHECK (length(country) = 2),
      -- Hundredths of a percent: 2000 is 20 %.
      rateHundredths INTEGER NOT NULL CHECK (${whole('rateHundredths')} AND rateHundredths BETWEEN 0 AND 10000),
      validFrom TEXT NOT NULL,
      PRIMARY KEY (country, validFrom)
    )`,
    ...standardRates.map(
      ({ country, rateHundredths, validFrom }) =>
        `INSERT INTO taxRates VALUES ('${country}', ${rateHundredths}, '${validFrom}')`,
    ),
    ...appendOnly('taxRates'),
    `CREATE TABLE exchangeRates (
      fromCurrency TEXT NOT NULL,
      toCurrency TEXT NOT NULL,
      -- Millionths of a unit of toCurrency for one unit of fromCurrency.
      rateMillionths INTEGER NOT NULL CHECK (${whole('rateMillionths')} AND rateMillionths > 0),
      validFrom TEXT NOT NULL,
      PRIMARY KEY (fromCurrency, toCurrency, validFrom)
    )`,
    ...exchangeRates.map(
      ({ fromCurrency, toCurrency, rateMillionths, validFrom }) =>
        `INSERT INTO exchangeRates VALUES ('${fromCurrency}', '${toCurrency}', ${rateMillionths}, '${validFrom}')`,
    ),
    ...appendOnly('exchangeRates'),
  ],
};
