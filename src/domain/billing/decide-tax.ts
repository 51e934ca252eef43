/** Which tax a sale of credits bears: chosen by tax point, seller and buyer from the dated rates, then frozen. */
import type { TaxRate } from './standard-rates.ts';

/** UNTDID 5305 codes as EN 16931 uses them: S standard rate, AE reverse charge, O outside the scope. */
export type TaxCategory = 'S' | 'AE' | 'O';

export interface TaxDecision {
  category: TaxCategory;
  rateHundredths: number;
  /** Country whose tax it is; null when there is none. */
  country: string | null;
  /** Words that the invoice must carry; null when none. */
  note: string | null;
}

export interface TaxParty {
  country: string;
  /** Already checked. */
  vatNumber: string | null;
}

/** Two letters as VAT numbers use them are those of the country, but EL for Greece. */
export const unionCountries: ReadonlySet<string> = new Set([
  'AT',
  'BE',
  'BG',
  'HR',
  'CY',
  'CZ',
  'DK',
  'EE',
  'FI',
  'FR',
  'DE',
  'GR',
  'HU',
  'IE',
  'IT',
  'LV',
  'LT',
  'LU',
  'MT',
  'NL',
  'PL',
  'PT',
  'RO',
  'SK',
  'SI',
  'ES',
  'SE',
]);

/** The rate of a country on a day (RFC 3339 or YYYY-MM-DD), or null when the table has none. */
export function rateOn(rates: readonly TaxRate[], country: string, taxPoint: string): number | null {
  const valid = rates.filter((rate) => rate.country === country && rate.validFrom <= taxPoint.slice(0, 10));
  return (
    valid.reduce<TaxRate | null>((newest, rate) => (newest && newest.validFrom > rate.validFrom ? newest : rate), null)
      ?.rateHundredths ?? null
  );
}

/**
 * Credits are taxed as a prepayment of electronically supplied services at the top-up: a configured assumption.
 *
 * Same country as the seller: its standard rate. A buyer with a VAT number elsewhere in the EU or the UK: reverse
 * charge (general rule for services between businesses, EU VAT Directive arts. 44 and 196). A buyer without one in a
 * country of the table: that country's rate (services to consumers, art. 58; the seller is taken to be registered).
 * Anywhere else: outside the scope. From the Directive as recalled; not tax advice.
 */
export function decideTax(options: {
  seller: TaxParty;
  buyer: TaxParty;
  taxPoint: string;
  rates: readonly TaxRate[];
}): TaxDecision {
  const { seller, buyer, taxPoint, rates } = options;
  const rate = rateOn(rates, buyer.country, taxPoint);
  if (buyer.country === seller.country)
    return rate === null ? outside : { category: 'S', rateHundredths: rate, country: buyer.country, note: null };
  if (rate === null) return outside;
  if (buyer.vatNumber)
    return {
      category: 'AE',
      rateHundredths: 0,
      country: null,
      note: 'Reverse charge: the recipient of the service accounts for the VAT.',
    };
  return { category: 'S', rateHundredths: rate, country: buyer.country, note: null };
}

const outside: TaxDecision = {
  category: 'O',
  rateHundredths: 0,
  country: null,
  note: 'Outside the scope of the seller’s VAT.',
};

/**
 * Tax on a net amount in minor units, rounded half up once per rate on the invoice: the rounding rule of this house,
 * stated on the invoice (EN 16931 BR-CO-17 rounds per category).
 */
export function taxOf(netMinor: number, rateHundredths: number): number {
  if (netMinor < 0) throw new Error('Tax is taken of amounts that are not negative.');
  return Number((BigInt(netMinor) * BigInt(rateHundredths) + 5_000n) / 10_000n);
}

/** `20`, `25.5`: hundredths of a percent as text. */
export function percentText(rateHundredths: number): string {
  const fraction = String(rateHundredths % 100)
    .padStart(2, '0')
    .replace(/0+$/, '');
  return `${Math.floor(rateHundredths / 100)}${fraction ? `.${fraction}` : ''}`;
}
