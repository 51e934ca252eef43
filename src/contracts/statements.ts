/** Statements of a team by calendar month in its time zone. All amounts are integer microcredits. */
import { z } from 'zod';
import { lanes } from '@/domain/pricing/price-book.ts';
import { contract } from './contract.ts';
import { pageQuery } from './page.ts';
import { money } from './purchase.ts';

const refusals = ['not_signed_in', 'not_found', 'forbidden', 'invalid_input'] as const;
const access = { kind: 'team', permission: 'billing:read' } as const;
const microcredits = z.number().int();

export const month = z.string().regex(/^20\d\d-(0[1-9]|1[0-2])$/, 'A month such as 2026-12.');
const year = z.coerce.number().int().min(2000).max(2099);

/** opening + bought + granted + earned − spent − refunded − taken back = closing, to the microcredit. */
export const statementFigures = z.object({
  /** Available, held and frozen together. */
  openingMicrocredits: microcredits,
  boughtMicrocredits: microcredits,
  grantedMicrocredits: microcredits,
  earnedMicrocredits: microcredits,
  spentMicrocredits: microcredits,
  refundedMicrocredits: microcredits,
  /** Of purchases whose payment was disputed and lost. */
  takenBackMicrocredits: microcredits,
  closingMicrocredits: microcredits,
});
export type StatementFigures = z.infer<typeof statementFigures>;

/** What was spent on something; `id` is null where nothing was named. */
export const spending = z.object({
  id: z.string().nullable(),
  name: z.string(),
  spentMicrocredits: microcredits,
  jobs: z.number().int(),
});
export type Spending = z.infer<typeof spending>;

export const statement = statementFigures.extend({
  month,
  timeZone: z.string(),
  /** RFC 3339; from here … */
  startsAt: z.string(),
  /** … to before here. */
  endsAt: z.string(),
  /** False while the month runs: the figures are those until now. */
  complete: z.boolean(),
  closing: z.object({
    availableMicrocredits: microcredits,
    heldMicrocredits: microcredits,
    frozenMicrocredits: microcredits,
  }),
  byProjectCode: z.array(spending),
  byMember: z.array(spending),
  byLane: z.array(spending),
  lines: z.number().int(),
  invoices: z.array(
    z.object({ id: z.string(), number: z.string(), kind: z.string(), issuedAt: z.string(), total: money }),
  ),
  /** The newest ledger transaction of the team at the end; its hash covers every transaction before it. */
  head: z.object({ sequence: z.number().int(), hash: z.string(), occurredAt: z.string() }).nullable(),
});
export type StatementDocument = z.infer<typeof statement>;

/** What one charge segment (the launch of a job, or one extension of it) was charged in the month. */
export const statementLine = z.object({
  segmentId: z.string(),
  jobId: z.string(),
  jobName: z.string(),
  /** 0 for the launch, then 1 for each extension. */
  extension: z.number().int(),
  projectCode: z.string().nullable(),
  member: z.string(),
  lane: z.enum(lanes).nullable(),
  charges: z.number().int(),
  lastChargedAt: z.string(),
  spentMicrocredits: microcredits,
});
export type StatementLine = z.infer<typeof statementLine>;

export const readStatement = contract({
  id: 'readStatement',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/statements',
  summary: 'The statement of one month, by default the present one',
  access,
  query: z.object({ month: month.optional() }),
  answers: [{ status: 200, description: 'Statement', schema: z.object({ statement }) }],
  refusals: [...refusals],
});

export const listStatementLines = contract({
  id: 'listStatementLines',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/statements/lines',
  summary: 'What each job was charged in one month, newest launch first',
  access,
  query: pageQuery.extend({ month: month.optional() }),
  answers: [
    {
      status: 200,
      description: 'Lines',
      schema: z.object({ lines: z.array(statementLine), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...refusals],
});

export const exportStatement = contract({
  id: 'exportStatement',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/statements/csv',
  summary: 'The lines of one month as CSV',
  access,
  query: z.object({ month: month.optional() }),
  answers: [{ status: 200, description: 'CSV', contentType: 'text/csv' }],
  refusals: [...refusals],
});

export const yearSummary = z.object({
  year: z.number().int(),
  timeZone: z.string(),
  /** Months that have begun, January first. */
  months: z.array(statementFigures.extend({ month })),
  total: statementFigures,
  byProjectCode: z.array(spending),
});
export type YearSummary = z.infer<typeof yearSummary>;

export const readYearSummary = contract({
  id: 'readYearSummary',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/statements/year',
  summary: 'The statements of a calendar year side by side, by default the present one',
  access,
  query: z.object({ year: year.optional() }),
  answers: [{ status: 200, description: 'Summary', schema: z.object({ summary: yearSummary }) }],
  refusals: [...refusals],
});

export const exportYearSummary = contract({
  id: 'exportYearSummary',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/statements/year/csv',
  summary: 'The statements of a calendar year as CSV',
  access,
  query: z.object({ year: year.optional() }),
  answers: [{ status: 200, description: 'CSV', contentType: 'text/csv' }],
  refusals: [...refusals],
});

export const statementContracts = [
  readStatement,
  listStatementLines,
  exportStatement,
  readYearSummary,
  exportYearSummary,
];
