/** Everything that stands on an invoice or pro-forma for credits, computed once, in integers. */
import { percentText, taxOf, type TaxCategory, type TaxDecision } from './decide-tax.ts';

export interface Party {
  name: string;
  /** Lines separated by newlines; empty when not given. */
  address: string;
  country: string;
  vatNumber: string | null;
}

export interface InvoiceLine {
  description: string;
  quantity: number;
  unit: string;
  netMinor: number;
}

export interface InvoiceTax {
  category: TaxCategory;
  rateHundredths: number;
  country: string | null;
  baseMinor: number;
  taxMinor: number;
  note: string | null;
  /** The tax in the currency of the seller's books, where that is another one. */
  inBooks?: { currency: string; taxMinor: number; rateMillionths: number } | null;
}

export interface InvoiceFace {
  currency: string;
  netMinor: number;
  taxMinor: number;
  totalMinor: number;
  creditsMicrocredits: number;
  seller: Party;
  buyer: Party;
  lines: InvoiceLine[];
  taxes: InvoiceTax[];
  notes: string[];
  purchaseOrder: string | null;
}

export interface SalePrice {
  netMinor: number;
  taxMinor: number;
  totalMinor: number;
}

/** Net, tax and total of a sale under a tax decision. */
export function priceSale(netMinor: number, tax: TaxDecision): SalePrice {
  const taxMinor = taxOf(netMinor, tax.rateHundredths);
  return { netMinor, taxMinor, totalMinor: netMinor + taxMinor };
}

/** Tax in the currency of the seller's books, rounded half up; the rate in millionths. */
export const convertMinor = (minor: number, rateMillionths: number): number =>
  Number((BigInt(minor) * BigInt(rateMillionths) + 500_000n) / 1_000_000n);

const figure = (minor: number): string =>
  `${Math.floor(minor / 100).toLocaleString('en')}.${String(minor % 100).padStart(2, '0')}`;

export function composeFace(options: {
  seller: Party;
  buyer: Party;
  credits: number;
  creditsMicrocredits: number;
  netMinor: number;
  currency: string;
  tax: TaxDecision;
  /** Present when the seller keeps books in another currency. */
  books?: { currency: string; rateMillionths: number } | undefined;
  purchaseOrder?: string | null;
}): InvoiceFace {
  const { seller, buyer, credits, currency, tax, books } = options;
  const price = priceSale(options.netMinor, tax);
  const notes = [
    ...(tax.note ? [tax.note] : []),
    'Credits are taxed as a prepayment at the time of purchase. VAT is computed once per rate and rounded half up to the minor unit.',
  ];
  const inBooks =
    books && books.currency !== currency && price.taxMinor > 0
      ? { ...books, taxMinor: convertMinor(price.taxMinor, books.rateMillionths) }
      : null;
  if (inBooks)
    notes.push(
      `VAT in ${inBooks.currency}: ${figure(inBooks.taxMinor)} at ${inBooks.rateMillionths / 1_000_000} ${inBooks.currency} for 1 ${currency}.`,
    );
  return {
    ...price,
    currency,
    creditsMicrocredits: options.creditsMicrocredits,
    seller,
    buyer,
    lines: [
      {
        description: `${credits.toLocaleString('en')} credits for metered simulation compute`,
        quantity: 1,
        unit: 'pack',
        netMinor: price.netMinor,
      },
    ],
    taxes: [
      {
        category: tax.category,
        rateHundredths: tax.rateHundredths,
        country: tax.country,
        baseMinor: price.netMinor,
        taxMinor: price.taxMinor,
        note: tax.note,
        inBooks,
      },
    ],
    notes,
    purchaseOrder: options.purchaseOrder ?? null,
  };
}

/** `BUR-2026-00001` */
export const invoiceNumber = (series: string, year: number, numberInYear: number): string =>
  `${series}-${year}-${String(numberInYear).padStart(5, '0')}`;

/** `20 %` */
export const rateText = (rateHundredths: number): string => `${percentText(rateHundredths)} %`;
