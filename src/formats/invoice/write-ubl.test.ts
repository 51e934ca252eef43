/** UBL files against the business rules of EN 16931 (rule numbers as published; the rules' wording from memory). */
import { SaxesParser } from 'saxes';
import { describe, expect, it } from 'vitest';
import { composeFace } from '@/domain/billing/invoice-face.ts';
import type { TaxDecision } from '@/domain/billing/decide-tax.ts';
import { writeUbl, type UblDocument } from './write-ubl.ts';

const seller = { name: 'Burette & Co', address: '1 Quay\nTown T1 1TT', country: 'GB', vatNumber: 'GB999999973' };
const buyer = {
  name: 'Tarn <GmbH> "Süd"',
  address: 'Ufer 1\n10115 Berlin\nHaus B\nTor 3',
  country: 'DE',
  vatNumber: 'DE136695976',
};
const standard: TaxDecision = { category: 'S', rateHundredths: 1_900, country: 'DE', note: null };
const reverse: TaxDecision = { category: 'AE', rateHundredths: 0, country: null, note: 'Reverse charge: …' };
const outside: TaxDecision = {
  category: 'O',
  rateHundredths: 0,
  country: null,
  note: 'Outside the scope of the seller’s VAT.',
};

const documentOf = (tax: TaxDecision, more: Partial<UblDocument> = {}): UblDocument => ({
  kind: 'invoice',
  number: 'BUR-2026-00007',
  issuedAt: '2026-12-01T10:00:00.000Z',
  taxPoint: '2026-11-30T23:00:00.000Z',
  byCard: true,
  face: composeFace({
    seller,
    buyer,
    credits: 100,
    creditsMicrocredits: 100_000_000,
    netMinor: 9_505,
    currency: 'EUR',
    tax,
    books: { currency: 'GBP', rateMillionths: 860_000 },
    purchaseOrder: 'PO & 7',
  }),
  ...more,
});

/** Every element with text, by its path of local names; a list where it repeats. */
function read(xml: string): (path: string) => string[] {
  const values = new Map<string, string[]>();
  const path: string[] = [];
  let text = '';
  const parser = new SaxesParser({ xmlns: true });
  parser.on('opentag', ({ local }) => {
    path.push(local);
    text = '';
  });
  parser.on('text', (part) => (text += part));
  parser.on('closetag', () => {
    const key = path.join('/');
    if (text.trim() !== '') values.set(key, [...(values.get(key) ?? []), text]);
    path.pop();
    text = '';
  });
  parser.on('error', (error) => {
    throw error;
  });
  parser.write(xml).close();
  return (key) => values.get(key) ?? [];
}
const minor = (text: string | undefined): number => Math.round(Number(text) * 100);

describe.each([
  ['standard rate', standard],
  ['reverse charge', reverse],
  ['outside the scope', outside],
])('a UBL invoice at %s', (_, tax) => {
  const of = read(writeUbl(documentOf(tax)));
  const total = (name: string) => minor(of(`Invoice/LegalMonetaryTotal/${name}`)[0]);
  const inScope = tax.category !== 'O';

  it('adds up as BR-CO-10, 13, 14, 15 and 16 say', () => {
    const sum = (path: string) => of(path).reduce((all, value) => all + minor(value), 0);
    expect(total('LineExtensionAmount')).toBe(sum('Invoice/InvoiceLine/LineExtensionAmount'));
    expect(total('TaxExclusiveAmount')).toBe(total('LineExtensionAmount'));
    expect(minor(of('Invoice/TaxTotal/TaxAmount')[0])).toBe(sum('Invoice/TaxTotal/TaxSubtotal/TaxAmount'));
    expect(total('TaxInclusiveAmount')).toBe(total('TaxExclusiveAmount') + minor(of('Invoice/TaxTotal/TaxAmount')[0]));
    expect(total('PayableAmount')).toBe(total('TaxInclusiveAmount') - total('PrepaidAmount'));
  });

  it('rounds the tax of its category to two places (BR-CO-17)', () => {
    const rate = Number(of('Invoice/TaxTotal/TaxSubtotal/TaxCategory/Percent')[0] ?? 0);
    const base = minor(of('Invoice/TaxTotal/TaxSubtotal/TaxableAmount')[0]);
    expect(minor(of('Invoice/TaxTotal/TaxSubtotal/TaxAmount')[0])).toBe(Math.round((base * rate) / 100));
  });

  it('has the mandatory terms BR-01 to BR-11', () => {
    for (const path of [
      'CustomizationID',
      'ID',
      'IssueDate',
      'InvoiceTypeCode',
      'DocumentCurrencyCode',
      'AccountingSupplierParty/Party/PartyLegalEntity/RegistrationName',
      'AccountingCustomerParty/Party/PartyLegalEntity/RegistrationName',
      'AccountingSupplierParty/Party/PostalAddress/Country/IdentificationCode',
      'AccountingCustomerParty/Party/PostalAddress/Country/IdentificationCode',
    ])
      expect(of(`Invoice/${path}`), path).toHaveLength(1);
    expect(of('Invoice/InvoiceTypeCode')).toEqual(['380']);
  });

  it('states VAT numbers, rate and exemption as its category asks (BR-S, BR-AE, BR-O)', () => {
    expect(of('Invoice/AccountingSupplierParty/Party/PartyTaxScheme/CompanyID')).toHaveLength(inScope ? 1 : 0);
    expect(of('Invoice/AccountingCustomerParty/Party/PartyTaxScheme/CompanyID')).toHaveLength(inScope ? 1 : 0);
    expect(of('Invoice/InvoiceLine/Item/ClassifiedTaxCategory/Percent')).toHaveLength(inScope ? 1 : 0);
    const code = { S: [], AE: ['VATEX-EU-AE'], O: ['VATEX-EU-O'] }[tax.category];
    expect(of('Invoice/TaxTotal/TaxSubtotal/TaxCategory/TaxExemptionReasonCode')).toEqual(code);
  });
});

describe('writeUbl', () => {
  it('keeps every character of names and addresses', () => {
    const of = read(writeUbl(documentOf(standard)));
    const address = 'Invoice/AccountingCustomerParty/Party/PostalAddress';
    expect(of('Invoice/AccountingCustomerParty/Party/PartyName/Name')).toEqual(['Tarn <GmbH> "Süd"']);
    expect(of(`${address}/StreetName`)).toEqual(['Ufer 1']);
    expect(of(`${address}/AddressLine/Line`)).toEqual(['Haus B, Tor 3']);
    expect(of('Invoice/OrderReference/ID')).toEqual(['PO & 7']);
  });

  // Worked by hand: 0.19 × 95.05 = 18.0595 → 18.06; × 0.86 = 15.5316 → 15.53.
  it('states the tax in the currency of the books too (BR-53)', () => {
    const of = read(writeUbl(documentOf(standard)));
    expect(of('Invoice/TaxCurrencyCode')).toEqual(['GBP']);
    expect(of('Invoice/TaxTotal/TaxAmount')).toEqual(['18.06', '15.53']);
  });

  it('writes a credit note as a document of its own that names the invoice, with positive amounts', () => {
    const corrects = { number: 'BUR-2026-00003', issuedAt: '2026-11-02T08:00:00.000Z' };
    const of = read(writeUbl(documentOf(standard, { kind: 'credit_note', corrects })));
    expect(of('CreditNote/CreditNoteTypeCode')).toEqual(['381']);
    expect(of('CreditNote/BillingReference/InvoiceDocumentReference/ID')).toEqual(['BUR-2026-00003']);
    expect(of('CreditNote/CreditNoteLine/CreditedQuantity')).toEqual(['1']);
    expect(of('CreditNote/LegalMonetaryTotal/PayableAmount')).toEqual(['113.11']);
  });
});
