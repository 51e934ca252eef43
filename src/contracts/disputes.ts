/** Disputed payments and what is owed after them, as our own staff see them. */
import { z } from 'zod';
import { contract } from './contract.ts';
import { line, money } from './purchase.ts';
import { returnStates } from './refunds.ts';

const refusals = ['not_signed_in', 'not_found'] as const;
const microcredits = z.number().int();
const about = {
  id: z.string(),
  team: z.object({ slug: z.string(), name: z.string() }),
  invoiceId: z.string(),
  invoiceNumber: z.string(),
  /** Tax included. */
  total: money,
};

export const dispute = z.object({
  ...about,
  state: z.enum(['open', 'won', 'lost']),
  /** In the payment service's words, such as `fraudulent`. */
  reason: z.string(),
  openedAt: z.string(),
  decidedAt: z.string().nullable(),
  frozenMicrocredits: microcredits,
  takenMicrocredits: microcredits,
  /** What somebody has to look at. */
  problem: z.string().nullable(),
});
export type DisputeDocument = z.infer<typeof dispute>;

export const receivable = z.object({
  ...about,
  state: z.enum(['open', 'settled', 'written_off']),
  createdAt: z.string(),
  decidedAt: z.string().nullable(),
  reason: z.string().nullable(),
});
export type ReceivableDocument = z.infer<typeof receivable>;

export const disputesAnswer = z.object({
  disputes: z.array(dispute),
  receivables: z.array(receivable),
  returns: z.array(
    z.object({
      ...about,
      cause: z.enum(['refund', 'dispute']),
      state: z.enum(returnStates),
      amountMicrocredits: microcredits,
      createdAt: z.string(),
      problem: z.string().nullable(),
    }),
  ),
});
export type DisputesAnswer = z.infer<typeof disputesAnswer>;

export const listDisputes = contract({
  id: 'listDisputes',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/disputes',
  summary: 'The latest disputes, receivables and returns of all teams, fifty of each',
  access: { kind: 'operator' },
  answers: [{ status: 200, description: 'Disputes', schema: disputesAnswer }],
  refusals: [...refusals],
});

export const decideReceivable = contract({
  id: 'decideReceivable',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/operate/receivables/{receivable}/decision',
  summary: 'Say that a receivable is settled, or write it off; launching is free again then',
  access: { kind: 'operator' },
  body: z.strictObject({ outcome: z.enum(['settled', 'written_off']), reason: line(200) }),
  answers: [{ status: 200, description: 'Decided', schema: z.object({ state: z.enum(['settled', 'written_off']) }) }],
  refusals: [...refusals, 'invalid_input'],
});

export const disputeContracts = [listDisputes, decideReceivable];
