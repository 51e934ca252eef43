/** The frozen face of a stored invoice or pro-forma. */
import type { Invoice, ProForma } from '@db/models/billing.ts';
import type { InvoiceFace } from '@/domain/billing/invoice-face.ts';

export const faceOf = (row: Invoice | ProForma): InvoiceFace => ({
  currency: row.currency,
  netMinor: row.netMinor,
  taxMinor: row.taxMinor,
  totalMinor: row.totalMinor,
  creditsMicrocredits: row.creditsMicrocredits,
  seller: row.seller,
  buyer: row.buyer,
  lines: row.lines,
  taxes: row.taxes,
  notes: row.notes,
  purchaseOrder: row.purchaseOrder,
});
