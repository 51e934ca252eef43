/** How the charge of a job came about, down to the ledger. Amounts are integer microcredits; event counts are decimal text. */
import { z } from 'zod';
import { transactionKinds } from '@/domain/ledger/accounts.ts';
import { lanes, methodFamilies } from '@/domain/pricing/price-book.ts';
import { contract } from './contract.ts';

const microcredits = z.number().int();

export const costSegment = z.object({
  id: z.string(),
  /** 0 for the launch, then 1 for each extension. */
  ordinal: z.number().int(),
  launchedBy: z.string(),
  startedAt: z.string(),
  priceBookVersion: z.number().int(),
  lane: z.enum(lanes),
  family: z.enum(methodFamilies),
  microcreditsPerMillionEvents: microcredits,
  /** Metered and charged. */
  events: z.string(),
  /** events × rate / 1,000,000, before rounding: `18.2000005`, in credits. */
  exactCredits: z.string(),
  chargedMicrocredits: microcredits,
  /** Computed, delivered to nobody, charged to nobody. */
  absorbedEvents: z.string(),
  /** What they would have cost at this rate. */
  absorbedMicrocredits: microcredits,
  /** Nothing until listed models earn royalties. */
  royaltyMicrocredits: microcredits,
  capMicrocredits: microcredits,
  heldMicrocredits: microcredits,
  releasedMicrocredits: microcredits,
});

export const jobCost = z.object({
  jobId: z.string(),
  jobName: z.string(),
  projectCode: z.string().nullable(),
  chargedMicrocredits: microcredits,
  segments: z.array(costSegment),
  /** Lots that the charge was drawn from, with the invoice that bought them. */
  lots: z.array(
    z.object({
      id: z.string(),
      source: z.enum(['grant', 'royalty', 'bought']),
      drawnMicrocredits: microcredits,
      invoice: z.object({ id: z.string(), number: z.string() }).nullable(),
    }),
  ),
  /** The ledger's transactions of this job by kind; `listLedger` with `job` lists each. */
  transactions: z.array(
    z.object({ kind: z.enum(transactionKinds), count: z.number().int(), amountMicrocredits: microcredits }),
  ),
});
export type JobCost = z.infer<typeof jobCost>;

export const readJobCost = contract({
  id: 'readJobCost',
  feature: 'jobs',
  method: 'GET',
  path: '/api/v1/teams/{team}/jobs/{job}/cost',
  summary: 'How the charge of a job came about: rates, events, rounding, absorbed work, lots, ledger transactions',
  access: { kind: 'team', permission: 'credits:read' },
  answers: [{ status: 200, description: 'Cost', schema: z.object({ cost: jobCost }) }],
  refusals: ['not_signed_in', 'not_found', 'forbidden'],
});
