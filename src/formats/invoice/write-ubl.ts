/**
 * Writes an invoice or credit note as UBL 2.1 in the core of EN 16931, from the same frozen numbers as the PDF.
 * Element order follows the UBL schema; category rules follow the standard's BR-S, BR-AE and BR-O.
 */
import { percentText } from '@/domain/billing/decide-tax.ts';
import type { InvoiceFace, InvoiceTax } from '@/domain/billing/invoice-face.ts';
import { amount, cac, cbc, date, party } from './ubl-elements.ts';

export interface UblDocument {
  kind: 'invoice' | 'credit_note';
  number: string;
  issuedAt: string;
  taxPoint: string;
  face: InvoiceFace;
  /** Paid by card (true) or transfer. */
  byCard: boolean;
  /** Of a credit note: what it corrects. */
  corrects?: { number: string; issuedAt: string };
}

/** Code of UNCL 4461: 48 bank card; 1 not defined, since a transfer that has arrived needs no account. */
const paymentMeans = (byCard: boolean): string => (byCard ? '48' : '1');

const exemptions: Record<InvoiceTax['category'], { code: string; reason: string } | null> = {
  S: null,
  AE: { code: 'VATEX-EU-AE', reason: 'Reverse charge' },
  O: { code: 'VATEX-EU-O', reason: 'Not subject to VAT' },
};

/** BR-O-05: what is outside the scope has no rate. */
const percent = ({ category, rateHundredths }: InvoiceTax): string =>
  category === 'O' ? '' : cbc('Percent', percentText(rateHundredths));

function taxTotals({ taxes, taxMinor, currency }: InvoiceFace): string {
  const subtotals = taxes.map((tax) => {
    const exemption = exemptions[tax.category];
    return cac(
      'TaxSubtotal',
      amount('TaxableAmount', tax.baseMinor, currency),
      amount('TaxAmount', tax.taxMinor, currency),
      cac(
        'TaxCategory',
        cbc('ID', tax.category),
        percent(tax),
        exemption ? cbc('TaxExemptionReasonCode', exemption.code) + cbc('TaxExemptionReason', exemption.reason) : '',
        cac('TaxScheme', cbc('ID', 'VAT')),
      ),
    );
  });
  const books = taxes.find(({ inBooks }) => inBooks)?.inBooks;
  return [
    cac('TaxTotal', amount('TaxAmount', taxMinor, currency), ...subtotals),
    books ? cac('TaxTotal', amount('TaxAmount', books.taxMinor, books.currency)) : '',
  ]
    .filter(Boolean)
    .join('\n');
}

/** What is paid in full is prepaid; nothing is payable (BR-CO-16). A credit note states what is given back. */
function totals(document: UblDocument): string {
  const { netMinor, totalMinor, currency } = document.face;
  const paid = document.kind === 'invoice' ? totalMinor : 0;
  return cac(
    'LegalMonetaryTotal',
    amount('LineExtensionAmount', netMinor, currency),
    amount('TaxExclusiveAmount', netMinor, currency),
    amount('TaxInclusiveAmount', totalMinor, currency),
    paid > 0 ? amount('PrepaidAmount', paid, currency) : '',
    amount('PayableAmount', totalMinor - paid, currency),
  );
}

function lines({ kind, face }: UblDocument): string[] {
  const [tax] = face.taxes;
  if (!tax) throw new Error('An invoice without a tax category cannot be written.');
  const [line, quantityName] =
    kind === 'invoice' ? ['InvoiceLine', 'InvoicedQuantity'] : ['CreditNoteLine', 'CreditedQuantity'];
  return face.lines.map(({ description, quantity, netMinor }, place) =>
    cac(
      line,
      cbc('ID', String(place + 1)),
      cbc(quantityName, String(quantity), { unitCode: 'C62' }),
      amount('LineExtensionAmount', netMinor, face.currency),
      cac(
        'Item',
        cbc('Name', description),
        cac('ClassifiedTaxCategory', cbc('ID', tax.category), percent(tax), cac('TaxScheme', cbc('ID', 'VAT'))),
      ),
      cac('Price', amount('PriceAmount', netMinor / quantity, face.currency)),
    ),
  );
}

export function writeUbl(document: UblDocument): string {
  const { kind, number, issuedAt, taxPoint, face, byCard, corrects } = document;
  const root = kind === 'invoice' ? 'Invoice' : 'CreditNote';
  const inScope = face.taxes.every(({ category }) => category !== 'O');
  const books = face.taxes.find(({ inBooks }) => inBooks)?.inBooks;
  const body = [
    cbc('CustomizationID', 'urn:cen.eu:en16931:2017'),
    cbc('ID', number),
    cbc('IssueDate', date(issuedAt)),
    // The schemas of the two documents order type code, note and tax point differently.
    ...(kind === 'invoice'
      ? [cbc('InvoiceTypeCode', '380'), cbc('Note', face.notes.join(' ')), cbc('TaxPointDate', date(taxPoint))]
      : [cbc('TaxPointDate', date(taxPoint)), cbc('CreditNoteTypeCode', '381'), cbc('Note', face.notes.join(' '))]),
    cbc('DocumentCurrencyCode', face.currency),
    books ? cbc('TaxCurrencyCode', books.currency) : '',
    cac('OrderReference', cbc('ID', face.purchaseOrder)),
    corrects
      ? cac(
          'BillingReference',
          cac('InvoiceDocumentReference', cbc('ID', corrects.number), cbc('IssueDate', date(corrects.issuedAt))),
        )
      : '',
    party('AccountingSupplierParty', face.seller, inScope),
    party('AccountingCustomerParty', face.buyer, inScope),
    cac('PaymentMeans', cbc('PaymentMeansCode', paymentMeans(byCard))),
    taxTotals(face),
    totals(document),
    ...lines(document),
  ].filter((part) => part !== '');
  const namespaces = [
    `xmlns="urn:oasis:names:specification:ubl:schema:xsd:${root}-2"`,
    `xmlns:cac="urn:oasis:names:specification:ubl:schema:xsd:CommonAggregateComponents-2"`,
    `xmlns:cbc="urn:oasis:names:specification:ubl:schema:xsd:CommonBasicComponents-2"`,
  ];
  return `<?xml version="1.0" encoding="UTF-8"?>\n<${root} ${namespaces.join(' ')}>\n${body.join('\n')}\n</${root}>\n`;
}
