/** Credit notes: what taking unused credits back is worth, and what stands on the note that says so. */
import { moneyOfDrawn } from '../ledger/lots.ts';
import { creditsText } from '../pricing/credits-text.ts';
import { taxOf } from './decide-tax.ts';
import { convertMinor, type InvoiceFace } from './invoice-face.ts';
import { dayText } from './money-text.ts';

/** A bought lot before the return at hand. */
export interface LotBeforeReturn {
  netMinor: number;
  creditsMicrocredits: number;
  remainingMicrocredits: number;
  /** Taken back before: what is neither remaining nor returned has been spent. */
  returnedMicrocredits: number;
  /** Net money given back before. */
  creditedNetMinor: number;
}

/**
 * Net money of the next return, minor units: the floor of the cumulative share, less what was given back before. The
 * return that empties the lot takes the remainder, so that money earned and money given back add up to what was paid.
 */
export function netOfReturn(lot: LotBeforeReturn, amountMicrocredits: number): number {
  const { netMinor, creditsMicrocredits, remainingMicrocredits, returnedMicrocredits, creditedNetMinor } = lot;
  if (amountMicrocredits <= 0 || amountMicrocredits > remainingMicrocredits)
    throw new Error(`A lot that has ${remainingMicrocredits} left cannot return ${amountMicrocredits}.`);
  const share = (drawnMicrocredits: number) => moneyOfDrawn({ netMinor, creditsMicrocredits, drawnMicrocredits });
  const spent = creditsMicrocredits - remainingMicrocredits - returnedMicrocredits;
  const emptied = amountMicrocredits === remainingMicrocredits;
  return (emptied ? netMinor - share(spent) : share(returnedMicrocredits + amountMicrocredits)) - creditedNetMinor;
}

/**
 * The face of a credit note on an invoice: amounts positive, as the document's type says what they mean. Tax is the
 * difference of cumulative taxes, so that notes on the whole invoice give back its tax exactly.
 */
export function composeCreditNote(options: {
  invoice: InvoiceFace & { number: string; issuedAt: string };
  amountMicrocredits: number;
  netMinor: number;
  /** On earlier notes of this invoice. */
  credited: { netMinor: number; taxMinor: number };
  reason: string;
}): InvoiceFace {
  const { invoice, amountMicrocredits, netMinor, credited, reason } = options;
  const [tax] = invoice.taxes;
  if (!tax) throw new Error(`Invoice ${invoice.number} has no tax line.`);
  const taxMinor = taxOf(credited.netMinor + netMinor, tax.rateHundredths) - credited.taxMinor;
  return {
    currency: invoice.currency,
    netMinor,
    taxMinor,
    totalMinor: netMinor + taxMinor,
    creditsMicrocredits: amountMicrocredits,
    seller: invoice.seller,
    buyer: invoice.buyer,
    lines: [
      { description: `${creditsText(amountMicrocredits)} taken back unused`, quantity: 1, unit: 'pack', netMinor },
    ],
    taxes: [
      {
        ...tax,
        baseMinor: netMinor,
        taxMinor,
        inBooks: tax.inBooks ? { ...tax.inBooks, taxMinor: convertMinor(taxMinor, tax.inBooks.rateMillionths) } : null,
      },
    ],
    notes: [
      `Corrects invoice ${invoice.number} of ${dayText(invoice.issuedAt)}. Reason: ${reason}`,
      ...(tax.note ? [tax.note] : []),
    ],
    purchaseOrder: invoice.purchaseOrder,
  };
}
