/** The UBL file of an invoice or credit note of the team. */
import { Invoice } from '@db/models/billing.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { writeUbl } from '@/formats/invoice/write-ubl.ts';
import { faceOf } from './face-of.ts';
import type { PrintedFile } from './file-response.ts';
import { findInvoice } from './find-invoice.ts';

export async function downloadInvoiceUbl(options: {
  actor: Actor;
  team: string;
  invoiceId: string;
}): Promise<Result<PrintedFile>> {
  const found = await findInvoice({ ...options, permission: 'billing:read' });
  if (!found.ok) return found;
  const { invoice } = found.value;
  const corrected = invoice.correctsInvoiceId ? await Invoice.findByPk(invoice.correctsInvoiceId) : null;
  const { kind, number, issuedAt, taxPoint } = invoice;
  const text = writeUbl({
    kind,
    number,
    issuedAt,
    taxPoint,
    face: faceOf(invoice),
    byCard: invoice.topUpId !== null || (corrected?.topUpId ?? null) !== null,
    ...(corrected ? { corrects: { number: corrected.number, issuedAt: corrected.issuedAt } } : {}),
  });
  return accept({ content: Buffer.from(text, 'utf8'), filename: `${number}.xml` });
}
