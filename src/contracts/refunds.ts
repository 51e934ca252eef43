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

export const refundContracts = [refundPurchase];
