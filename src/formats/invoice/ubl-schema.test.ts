/**
 * UBL files against a schema that is not ours: the JSON schema of EN 16931's UBL invoice that the general-purpose library
 * @e-invoice-eu/core ships. It closes every element (an unknown child fails), knows cardinalities and code lists, and
 * lists children in the order of the UBL schema. It knows invoices only, so a credit note is checked under the
 * invoice's names.
 */
import { invoiceSchema } from '@e-invoice-eu/core';
import { Ajv2019 } from 'ajv/dist/2019.js';
import { SaxesParser } from 'saxes';
import { describe, expect, it } from 'vitest';
import { composeFace } from '@/domain/billing/invoice-face.ts';
import type { TaxDecision } from '@/domain/billing/decide-tax.ts';
import { writeUbl, type UblDocument } from './write-ubl.ts';

interface Schema {
  type?: string;
  properties?: Record<string, Schema>;
  items?: Schema;
}
interface Element {
  name: string;
  attributes: Record<string, string>;
  children: Element[];
  text: string;
}
type Value = string | { [name: string]: Value } | Value[];

const schema = invoiceSchema as unknown as Schema;
const validate = new Ajv2019({ strict: false, allErrors: true }).compile(schema);

function parse(xml: string): Element {
  const root: Element = { name: '', attributes: {}, children: [], text: '' };
  const open = [root];
  const parser = new SaxesParser({ xmlns: false });
  parser.on('opentag', ({ name, attributes }) => {
    const element: Element = { name, attributes: attributes as Record<string, string>, children: [], text: '' };
    open.at(-1)!.children.push(element);
    open.push(element);
  });
  parser.on('text', (part) => (open.at(-1)!.text += part));
  parser.on('closetag', () => void open.pop());
  parser.on('error', (error) => {
    throw error;
  });
  parser.write(xml).close();
  return root.children[0]!;
}

/** As the schema's library writes it: repeated elements as lists, attributes as `name@attribute`. */
function asJson({ children, text }: Element, { properties = {} }: Schema): Value {
  if (children.length === 0) return text;
  const object: Record<string, Value> = {};
  for (const child of children) {
    const known = properties[child.name];
    const isList = known?.type === 'array';
    const value = asJson(child, (isList ? known.items : known) ?? {});
    if (isList) object[child.name] = [...((object[child.name] as Value[] | undefined) ?? []), value];
    else if (child.name in object) throw new Error(`${child.name} stands twice`);
    else object[child.name] = value;
    for (const [attribute, content] of Object.entries(child.attributes)) object[`${child.name}@${attribute}`] = content;
  }
  return object;
}

/** Names of children that stand before one which the schema puts earlier. */
function misplaced({ name, children }: Element, { properties = {} }: Schema): string[] {
  const order = Object.keys(properties);
  const places = children.map((child) => order.indexOf(child.name));
  const own = children.filter((_, place) => place > 0 && places[place]! < places[place - 1]!);
  const inner = children.flatMap((child) => {
    const known = properties[child.name] ?? {};
    return misplaced(child, known.items ?? known);
  });
  return [...own.map((child) => `${name}/${child.name}`), ...inner];
}

/** A credit note under the names of an invoice. */
const asInvoice = (xml: string): string =>
  xml.replaceAll('CreditNote', 'Invoice').replaceAll('CreditedQuantity', 'InvoicedQuantity');

function faults(xml: string): string[] {
  validate({ 'ubl:Invoice': asJson(parse(asInvoice(xml)), schema.properties!['ubl:Invoice']!) });
  return (validate.errors ?? []).map(({ instancePath, message }) => `${instancePath} ${message}`);
}

const seller = { name: 'Burette & Co', address: '1 Quay\nTown T1 1TT', country: 'GB', vatNumber: 'GB999999973' };
const buyer = { name: 'Tarn <GmbH>', address: 'Ufer 1\nBerlin\nHaus B', country: 'DE', vatNumber: 'DE136695976' };
const taxes: [string, TaxDecision][] = [
  ['standard rate', { category: 'S', rateHundredths: 1_900, country: 'DE', note: null }],
  ['reverse charge', { category: 'AE', rateHundredths: 0, country: null, note: 'Reverse charge: …' }],
  ['outside the scope', { category: 'O', rateHundredths: 0, country: null, note: 'Outside the scope.' }],
];
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

describe.each(taxes)('at %s', (_, tax) => {
  it('an invoice is valid and its elements stand in order', () => {
    const xml = writeUbl(documentOf(tax));
    expect(faults(xml)).toEqual([]);
    expect(misplaced(parse(xml), schema.properties!['ubl:Invoice']!)).toEqual([]);
  });

  it('a credit note is valid', () => {
    const corrects = { number: 'BUR-2026-00003', issuedAt: '2026-11-02T08:00:00.000Z' };
    expect(faults(writeUbl(documentOf(tax, { kind: 'credit_note', byCard: false, corrects })))).toEqual([]);
  });
});

describe('the schema', () => {
  const xml = writeUbl(documentOf(taxes[0]![1]));
  it('finds an unknown element, a missing one, a code of no list and a displaced one', () => {
    expect(faults(xml.replace('<cbc:ID>', '<cbc:Colour>red</cbc:Colour><cbc:ID>'))).not.toEqual([]);
    expect(faults(xml.replace(/<cbc:IssueDate>.*?<\/cbc:IssueDate>/, ''))).not.toEqual([]);
    expect(faults(xml.replaceAll('EUR', 'EUX'))).not.toEqual([]);
    const line = /<cbc:DocumentCurrencyCode>.*?<\/cbc:DocumentCurrencyCode>/;
    const moved = xml.replace(line, '').replace('</Invoice>', `${line.exec(xml)![0]}</Invoice>`);
    expect(misplaced(parse(moved), schema.properties!['ubl:Invoice']!)).toEqual(['Invoice/cbc:DocumentCurrencyCode']);
  });
});
