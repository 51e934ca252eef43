/** The next number of a series of invoices or credit notes in its year. Only inside the write transaction that uses it. */
import { Invoice } from '@db/models/billing.ts';
import { invoiceNumber } from '@/domain/billing/invoice-face.ts';

export async function nextInvoiceNumber(
  series: string,
  issuedAt: string,
): Promise<{ series: string; year: number; numberInYear: number; number: string }> {
  const year = Number(issuedAt.slice(0, 4));
  const last = (await Invoice.max('numberInYear', { where: { series, year } })) as number | null;
  const numberInYear = (last ?? 0) + 1;
  return { series, year, numberInYear, number: invoiceNumber(series, year, numberInYear) };
}
