/** A top-up by card as the API shows it. */
import { z } from 'zod';
import { money } from './purchase.ts';

/** `processing`: paid by a method that settles later. Only `paid` has issued credits. */
export const topUpStates = ['pending', 'processing', 'paid', 'failed', 'expired'] as const;

export const topUp = z.object({
  id: z.string(),
  state: z.enum(topUpStates),
  credits: z.number().int(),
  net: money,
  tax: money,
  total: money,
  createdAt: z.string(),
  paidAt: z.string().nullable(),
  /** Where to go on paying, while it is pending. */
  checkoutUrl: z.string().nullable(),
  /** Why the last attempt did not pass, in words. */
  problem: z.string().nullable(),
  invoiceId: z.string().nullable(),
  /** `automatic`: charged to the saved card. */
  way: z.enum(['checkout', 'automatic']),
});
export type TopUpDocument = z.infer<typeof topUp>;
