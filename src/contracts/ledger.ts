/** Credits and the ledger. All amounts are integer microcredits (1 credit = 1,000,000). */
import { z } from 'zod';
import { transactionKinds } from '@/domain/ledger/accounts.ts';
import { contract } from './contract.ts';
import { dayRange, pageQuery } from './page.ts';

const microcredits = z.number().int();

export const creditsAnswer = z.object({
  /** Free to hold for a new job. */
  availableMicrocredits: microcredits,
  /** Set aside for open jobs. */
  heldMicrocredits: microcredits,
  /** Set aside while a payment is disputed. */
  frozenMicrocredits: microcredits,
  spentMicrocredits: microcredits,
  returnedMicrocredits: microcredits,
  boughtMicrocredits: microcredits,
  grantedMicrocredits: microcredits,
  earnedMicrocredits: microcredits,
  /** Settled since the first of the month in the team's time zone. */
  spentThisMonthMicrocredits: microcredits,
  monthStartedAt: z.string(),
});
export type CreditsAnswer = z.infer<typeof creditsAnswer>;

export const readCredits = contract({
  id: 'readCredits',
  feature: 'ledger',
  method: 'GET',
  path: '/api/v1/teams/{team}/credits',
  summary: 'Credits of the team: available, held, spent',
  access: { kind: 'team', permission: 'credits:read' },
  answers: [{ status: 200, description: 'Credits', schema: creditsAnswer }],
  refusals: ['not_signed_in', 'not_found', 'forbidden'],
});

export const ledgerEntry = z.object({
  id: z.string(),
  /** Place in the chain of all transactions. */
  sequence: z.number().int(),
  kind: z.enum(transactionKinds),
  occurredAt: z.string(),
  /** One sentence for a person. */
  description: z.string(),
  jobId: z.string().nullable(),
  person: z.object({ id: z.string(), name: z.string() }).nullable(),
  /** What this entry changed. */
  availableChangeMicrocredits: microcredits,
  heldChangeMicrocredits: microcredits,
  spentChangeMicrocredits: microcredits,
  /** What the team had after it. */
  availableMicrocredits: microcredits,
  heldMicrocredits: microcredits,
  /** Metered events of a settlement. */
  events: z.string().nullable(),
  /** The lots that it issued, drew from or froze. */
  lotIds: z.array(z.string()),
  /** Events that were computed and not charged. */
  absorbedEvents: z.string().nullable(),
  /** SHA-256 of this transaction, which covers all before it. */
  hash: z.string(),
});
export type LedgerEntry = z.infer<typeof ledgerEntry>;

const ledgerFilters = z.object({
  kind: z.enum(transactionKinds).optional(),
  job: z.string().max(100).optional(),
  /** Entries that issued the lot, drew from it, froze it or set it free. */
  lot: z.string().max(100).optional(),
  ...dayRange,
});

export const listLedger = contract({
  id: 'listLedger',
  feature: 'ledger',
  method: 'GET',
  path: '/api/v1/teams/{team}/ledger',
  summary: 'Ledger entries of the team, newest first',
  access: { kind: 'team', permission: 'credits:read' },
  query: pageQuery.extend(ledgerFilters.shape),
  answers: [
    {
      status: 200,
      description: 'Entries',
      schema: z.object({ entries: z.array(ledgerEntry), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: ['not_signed_in', 'not_found', 'forbidden', 'invalid_input'],
});

export const exportLedger = contract({
  id: 'exportLedger',
  feature: 'ledger',
  method: 'GET',
  path: '/api/v1/teams/{team}/ledger/csv',
  summary: 'Ledger entries as CSV, newest first',
  access: { kind: 'team', permission: 'credits:read' },
  query: ledgerFilters,
  answers: [{ status: 200, description: 'CSV', contentType: 'text/csv' }],
  refusals: ['not_signed_in', 'not_found', 'forbidden', 'invalid_input'],
});

export const ledgerContracts = [readCredits, listLedger, exportLedger];
