/** Pro-formas: paying a pack by bank transfer. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { contract } from './contract.ts';
import { pageQuery } from './page.ts';
import { currency, line, money, pack } from './purchase.ts';

const team = ['not_signed_in', 'not_found', 'forbidden'] as const;

export const proFormaStates = ['open', 'paid', 'expired', 'cancelled'] as const;

export const proForma = z.object({
  id: z.string(),
  /** `PF-2026-00001`: a series of its own; not a tax document. */
  number: z.string(),
  state: z.enum(proFormaStates),
  createdAt: z.string(),
  dueAt: z.string(),
  /** Open and past its due date. */
  overdue: z.boolean(),
  termsDays: z.number().int(),
  purchaseOrder: z.string(),
  credits: z.number().int(),
  net: money,
  tax: money,
  total: money,
  invoiceId: z.string().nullable(),
});
export type ProFormaDocument = z.infer<typeof proForma>;

export const requestProForma = contract({
  id: 'requestProForma',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/teams/{team}/pro-formas',
  summary: 'Ask to pay a credit pack by bank transfer',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.object({
    pack,
    currency,
    purchaseOrder: line(limits.nameCharacters),
    termsDays: z.union([z.literal(14), z.literal(30), z.literal(60)]).default(30),
  }),
  answers: [{ status: 201, description: 'Pro-forma opened', schema: z.object({ proForma }) }],
  refusals: [
    ...team,
    'team_suspended',
    'invalid_input',
    'unknown_pack',
    'billing_details_missing',
    'idempotency_key_reused',
  ],
  idempotency: 'transaction',
});

export const listProFormas = contract({
  id: 'listProFormas',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/pro-formas',
  summary: 'Pro-formas, newest first',
  access: { kind: 'team', permission: 'billing:read' },
  query: pageQuery,
  answers: [
    {
      status: 200,
      description: 'Pro-formas',
      schema: z.object({ proFormas: z.array(proForma), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...team, 'invalid_input'],
});

export const downloadProFormaPdf = contract({
  id: 'downloadProFormaPdf',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/pro-formas/{proForma}/pdf',
  summary: 'The pro-forma as PDF',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'PDF', contentType: 'application/pdf' }],
  refusals: [...team],
});

export const markTransferReceived = contract({
  id: 'markTransferReceived',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/operate/pro-formas/{proForma}/received',
  summary: 'Say that the transfer of a pro-forma has arrived: credits and invoice follow',
  access: { kind: 'operator' },
  answers: [{ status: 200, description: 'Received', schema: z.object({ invoiceId: z.string() }) }],
  refusals: ['not_signed_in', 'not_found', 'invalid_input'],
});

export const proFormaContracts = [requestProForma, listProFormas, downloadProFormaPdf, markTransferReceived];
