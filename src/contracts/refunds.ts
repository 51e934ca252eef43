/** Refunds of unused credits, by an operator. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { contract } from './contract.ts';
import { line, money } from './purchase.ts';

export const refundPurchase = contract({
  id: 'refundPurchase',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/operate/invoices/{invoice}/refunds',
  summary: 'Take unused credits of one purchase back and return their money, with a credit note',
  access: { kind: 'operator' },
  body: z.object({
    /** Absent: all that is neither spent, held nor disputed. */
    amountMicrocredits: z.number().int().min(1).max(limits.integer).optional(),
    /** Stands on the credit note. */
    reason: line(200),
  }),
  answers: [
    {
      status: 201,
      description: 'Refunded',
      schema: z.object({
        returnId: z.string(),
        creditNoteId: z.string(),
        amountMicrocredits: z.number().int(),
        total: money,
      }),
    },
  ],
  refusals: ['not_signed_in', 'not_found', 'invalid_input', 'insufficient_credits', 'idempotency_key_reused'],
  idempotency: 'service',
});

/** `by_transfer`: we pay by hand; `taken`: the bank has the money already. */
export const returnStates = ['pending', 'sent', 'failed', 'by_transfer', 'taken'] as const;

export const refundable = z.object({
  /** Neither spent, held nor disputed. */
  refundableMicrocredits: z.number().int(),
  remainingMicrocredits: z.number().int(),
  disputed: z.boolean(),
  /** Oldest first. */
  returns: z.array(
    z.object({
      id: z.string(),
      cause: z.enum(['refund', 'dispute']),
      state: z.enum(returnStates),
      amountMicrocredits: z.number().int(),
      total: money,
      creditNoteNumber: z.string(),
      reason: z.string(),
      createdAt: z.string(),
      problem: z.string().nullable(),
    }),
  ),
});
export type Refundable = z.infer<typeof refundable>;

export const readRefundable = contract({
  id: 'readRefundable',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/operate/invoices/{invoice}/refunds',
  summary: 'What of an invoice can be refunded now, and what has been',
  access: { kind: 'operator' },
  answers: [{ status: 200, description: 'Refunds', schema: refundable }],
  refusals: ['not_signed_in', 'not_found'],
});

export const refundContracts = [refundPurchase, readRefundable];
