/** An issued invoice as PDF: made from its frozen row, so the same bytes every time. */
import type { Invoice } from '@db/models/billing.ts';
import { dayText } from '@/domain/billing/money-text.ts';
import { writePdf } from '@/formats/invoice/write-pdf.ts';
import { faceOf } from './face-of.ts';
import { invoiceFonts } from './invoice-fonts.ts';

export async function printInvoice(invoice: Invoice): Promise<Buffer> {
  const { number, issuedAt, taxPoint, paidAt, purchaseOrder } = invoice;
  const way = invoice.topUpId ? 'through the payment service' : 'by bank transfer';
  return writePdf(
    {
      title: invoice.kind === 'invoice' ? 'Invoice' : 'Credit note',
      number,
      issuedAt,
      facts: [
        { label: 'Date of issue', value: dayText(issuedAt) },
        { label: 'Tax point (prepayment)', value: dayText(taxPoint) },
        ...(purchaseOrder ? [{ label: 'Purchase order', value: purchaseOrder }] : []),
      ],
      face: faceOf(invoice),
      standing: `Paid ${way} on ${dayText(paidAt)}. Nothing is due.`,
      cautions: ['Tax treatment shown is configuration, not advice. Check it with your own adviser.'],
    },
    await invoiceFonts(),
  );
}
