/** Our own books and acts: for operators only. Money is integer minor units per currency, credits integer microcredits. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { contract } from './contract.ts';
import { priceBookAnswer } from './billing.ts';
import { invoiceMessage, invoiceSummary, messageBody } from './invoices.ts';
import { pageQuery } from './page.ts';
import { proForma } from './pro-formas.ts';
import { line, money } from './purchase.ts';

const access = { kind: 'operator' } as const;
const refusals = ['not_signed_in', 'not_found'] as const;
const microcredits = z.number().int();

/** Months are those of UTC. */
export const books = z.object({
  /** What teams have and have not spent, by where it came from. */
  owed: z.object({
    boughtMicrocredits: microcredits,
    grantedMicrocredits: microcredits,
    earnedMicrocredits: microcredits,
    /** Net money received for what is bought and unspent: not earned yet. */
    unearned: z.array(money),
  }),
  /** Tax included: what banks dispute now, what teams owe after lost disputes, and what was written off of it. */
  disputes: z.object({ open: z.array(money), owed: z.array(money), writtenOff: z.array(money) }),
  /** Net money of lots as they are drawn: floor(net × drawn / credits), cumulative, so that months add up to the net paid. */
  months: z.array(
    z.object({
      month: z.string(),
      earned: z.array(money),
      /** Net of invoices less that of credit notes, by date of issue. */
      invoiced: z.array(money),
      returnedMicrocredits: microcredits,
      spentMicrocredits: microcredits,
      absorbedEvents: z.string(),
      absorbedMicrocredits: microcredits,
    }),
  ),
  /** Of invoices less credit notes. */
  taxes: z.array(
    z.object({
      month: z.string(),
      country: z.string(),
      category: z.string(),
      ratePercent: z.string(),
      base: money,
      tax: money,
    }),
  ),
});
export type Books = z.infer<typeof books>;

export const readBooks = contract({
  id: 'readBooks',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/books',
  summary: 'Credits owed, revenue earned by month, credits returned, absorbed work, tax by country',
  access,
  answers: [{ status: 200, description: 'Books', schema: z.object({ books }) }],
  refusals: [...refusals],
});

const rate = z.number().int().min(1).max(1_000_000_000);
const perFamily = z.strictObject({ exact: rate, leap: rate });
const price = z.number().int().min(1).max(1_000_000_000);
const storedBook = priceBookAnswer.shape.priceBook;
export type StoredPriceBook = z.infer<typeof storedBook>;

export const listPriceBooks = contract({
  id: 'listPriceBooks',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/price-books',
  summary: 'Every version of the price book, newest first',
  access,
  answers: [{ status: 200, description: 'Price books', schema: z.object({ priceBooks: z.array(storedBook) }) }],
  refusals: [...refusals],
});

export const addPriceBook = contract({
  id: 'addPriceBook',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/operate/price-books',
  summary: 'Add a version of the price book that starts in the future',
  access,
  body: z.strictObject({
    startsAt: z.iso.datetime({ error: 'A moment such as 2027-01-01T00:00:00Z.' }),
    microcreditsPerMillionEvents: z.strictObject({ steady: perFamily, express: perFamily, overnight: perFamily }),
    packs: z
      .array(
        z.strictObject({
          credits: z.number().int().min(1).max(1_000_000),
          netMinor: z.strictObject({ EUR: price, GBP: price, USD: price }),
        }),
      )
      .min(1)
      .max(12)
      .refine((packs) => new Set(packs.map(({ credits }) => credits)).size === packs.length, 'Packs differ in size.'),
  }),
  answers: [{ status: 201, description: 'Added', schema: z.object({ priceBook: storedBook }) }],
  refusals: [...refusals, 'invalid_input', 'idempotency_key_reused'],
  idempotency: 'transaction',
});

export const grantGoodwill = contract({
  id: 'grantGoodwill',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/operate/grants',
  summary: 'Give a team credits, with a reason that it reads in its ledger',
  access,
  body: z.strictObject({
    /** The slug, as in the address of its pages. */
    team: line(limits.nameCharacters),
    microcredits: z.number().int().min(1).max(1_000_000_000_000),
    reason: line(limits.nameCharacters),
  }),
  answers: [{ status: 201, description: 'Granted', schema: z.object({ transactionId: z.string() }) }],
  refusals: [...refusals, 'invalid_input', 'idempotency_key_reused'],
  idempotency: 'transaction',
});

const ofTeam = z.object({ slug: z.string(), name: z.string() });

export const listOpenTransfers = contract({
  id: 'listOpenTransfers',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/pro-formas',
  summary: 'Open pro-formas of all teams, newest first',
  access,
  query: pageQuery,
  answers: [
    {
      status: 200,
      description: 'Pro-formas',
      schema: z.object({ proFormas: z.array(proForma.extend({ team: ofTeam })), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...refusals, 'invalid_input'],
});

const askedInvoice = invoiceSummary.extend({ team: ofTeam });
export type AskedInvoice = z.infer<typeof askedInvoice>;

export const listQuestionedInvoices = contract({
  id: 'listQuestionedInvoices',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/invoices',
  summary: 'Invoices that a team has questioned and not settled since, newest first',
  access,
  query: pageQuery,
  answers: [
    {
      status: 200,
      description: 'Invoices',
      schema: z.object({ invoices: z.array(askedInvoice), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...refusals, 'invalid_input'],
});

const thread = z.object({ invoice: askedInvoice, messages: z.array(invoiceMessage) });

export const readQuestionedInvoice = contract({
  id: 'readQuestionedInvoice',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/invoices/{invoice}/messages',
  summary: 'The thread of an invoice, as the operator reads it',
  access,
  answers: [{ status: 200, description: 'Thread', schema: thread }],
  refusals: [...refusals],
});

export const answerInvoice = contract({
  id: 'answerInvoice',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/operate/invoices/{invoice}/messages',
  summary: 'Answer a team about an invoice',
  access,
  body: messageBody,
  answers: [{ status: 201, description: 'Answered', schema: thread }],
  refusals: [...refusals, 'invalid_input', 'limit_reached', 'idempotency_key_reused'],
  idempotency: 'transaction',
});

export const operatorActKinds = [
  'add_price_book',
  'grant_goodwill',
  'mark_transfer_received',
  'answer_invoice',
  'refund_purchase',
  'settle_receivable',
  'write_off_receivable',
] as const;

export const operatorAct = z.object({
  id: z.string(),
  at: z.string(),
  person: z.string(),
  act: z.string(),
  team: ofTeam.nullable(),
  subjectId: z.string().nullable(),
  details: z.record(z.string(), z.unknown()),
});
export type OperatorActDocument = z.infer<typeof operatorAct>;

export const listOperatorActs = contract({
  id: 'listOperatorActs',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/acts',
  summary: 'What operators have done, newest first',
  access,
  query: pageQuery,
  answers: [
    {
      status: 200,
      description: 'Acts',
      schema: z.object({ acts: z.array(operatorAct), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...refusals, 'invalid_input'],
});

export const operateContracts = [
  readBooks,
  listPriceBooks,
  addPriceBook,
  grantGoodwill,
  listOpenTransfers,
  listQuestionedInvoices,
  readQuestionedInvoice,
  answerInvoice,
  listOperatorActs,
];
