/** A pro-forma as PDF. It says that it is no tax invoice. */
import type { ProForma } from '@db/models/billing.ts';
import { dayText } from '@/domain/billing/money-text.ts';
import { writePdf } from '@/formats/invoice/write-pdf.ts';
import { faceOf } from './face-of.ts';
import { invoiceFonts } from './invoice-fonts.ts';

export async function printProForma(row: ProForma): Promise<Buffer> {
  const { number, issuedAt, dueAt, termsDays, purchaseOrder } = row;
  return writePdf(
    {
      title: 'Pro-forma',
      number,
      issuedAt,
      facts: [
        { label: 'Date', value: dayText(issuedAt) },
        { label: 'Due', value: `${dayText(dueAt)} (${termsDays} days)` },
        ...(purchaseOrder ? [{ label: 'Purchase order', value: purchaseOrder }] : []),
      ],
      face: faceOf(row),
      standing: `Please transfer the total and name ${number}. Credits and the tax invoice follow when it has arrived.`,
      cautions: [
        'This is not a tax invoice.',
        'Tax treatment shown is configuration, not advice. Check it with your own adviser.',
      ],
    },
    await invoiceFonts(),
  );
}
