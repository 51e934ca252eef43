/** Elements of UBL 2.1 as text: `cbc` holds a value, `cac` holds elements. */
import type { Party } from '@/domain/billing/invoice-face.ts';

const escapes: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&apos;' };

/** Characters that XML 1.0 cannot hold are left out. */
export const escapeXml = (text: string): string =>
  text
    .replaceAll(/[^\t\n\r\u{20}-\u{d7ff}\u{e000}-\u{fffd}\u{10000}-\u{10ffff}]/gu, '')
    .replaceAll(/[&<>"']/g, (character) => escapes[character] ?? '');

/** A value; nothing when it is empty. */
export function cbc(name: string, value: string | null, attributes: Record<string, string> = {}): string {
  if (value === null || value === '') return '';
  const written = Object.entries(attributes).map(([key, text]) => ` ${key}="${escapeXml(text)}"`);
  return `<cbc:${name}${written.join('')}>${escapeXml(value)}</cbc:${name}>`;
}

/** A group; nothing when all of it is. */
export function cac(name: string, ...children: string[]): string {
  const content = children.filter((child) => child !== '');
  return content.length === 0 ? '' : `<cac:${name}>\n${content.join('\n')}\n</cac:${name}>`;
}

/** Minor units as a decimal with two places; never negative on these documents. */
export function decimal(minor: number): string {
  if (minor < 0) throw new Error('Amounts on invoices and credit notes are not negative.');
  return `${Math.floor(minor / 100)}.${String(minor % 100).padStart(2, '0')}`;
}

export const amount = (name: string, minor: number, currency: string): string =>
  cbc(name, decimal(minor), { currencyID: currency });

/** `YYYY-MM-DD` of an RFC 3339 time. */
export const date = (at: string): string => at.slice(0, 10);

/** `withVatNumber` is false where nothing is within the scope of VAT (EN 16931 BR-O-02). */
export function party(role: string, { name, address, country, vatNumber }: Party, withVatNumber: boolean): string {
  const [street = '', more = '', ...rest] = address.split('\n');
  return cac(
    role,
    cac(
      'Party',
      cac('PartyName', cbc('Name', name)),
      cac(
        'PostalAddress',
        cbc('StreetName', street),
        cbc('AdditionalStreetName', more),
        cac('AddressLine', cbc('Line', rest.join(', '))),
        cac('Country', cbc('IdentificationCode', country)),
      ),
      withVatNumber && vatNumber
        ? cac('PartyTaxScheme', cbc('CompanyID', vatNumber), cac('TaxScheme', cbc('ID', 'VAT')))
        : '',
      cac('PartyLegalEntity', cbc('RegistrationName', name)),
    ),
  );
}
