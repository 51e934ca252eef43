/** Price book, top-ups, payment webhooks, invoices, pro-formas. */
import type { Contract } from './contract.ts';

export const billingContracts: Contract[] = [];
