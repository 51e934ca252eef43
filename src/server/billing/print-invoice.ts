/** An issued invoice as PDF: made from its frozen row, so the same bytes every time. */
import { Invoice } from '@db/models/billing.ts';
import { dayText } from '@/domain/billing/money-text.ts';
import { writePdf } from '@/formats/invoice/write-pdf.ts';
import { faceOf } from './face-of.ts';
import { invoiceFonts } from './invoice-fonts.ts';

export async function printInvoice(invoice: Invoice): Promise<Buffer> {
  const { number, issuedAt, taxPoint, purchaseOrder, kind } = invoice;
  const corrected = invoice.correctsInvoiceId ? await Invoice.findByPk(invoice.correctsInvoiceId) : null;
  return writePdf(
    {
      title: kind === 'invoice' ? 'Invoice' : 'Credit note',
      number,
      issuedAt,
      facts: [
        { label: 'Date of issue', value: dayText(issuedAt) },
        corrected
          ? { label: 'Corrects invoice', value: `${corrected.number} of ${dayText(corrected.issuedAt)}` }
          : { label: 'Tax point (prepayment)', value: dayText(taxPoint) },
        ...(purchaseOrder ? [{ label: 'Purchase order', value: purchaseOrder }] : []),
      ],
      face: faceOf(invoice),
      standing: standingOf(invoice, corrected),
      cautions: ['Tax treatment shown is configuration, not advice. Check it with your own adviser.'],
    },
    await invoiceFonts(),
  );
}

function standingOf({ topUpId, paidAt }: Invoice, corrected: Invoice | null): string {
  if (corrected)
    return corrected.topUpId
      ? 'The money goes back the way it came. Nothing is due.'
      : 'The money goes back by bank transfer. Nothing is due.';
  return `Paid ${topUpId ? 'through the payment service' : 'by bank transfer'} on ${dayText(paidAt)}. Nothing is due.`;
}
