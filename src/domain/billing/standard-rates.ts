/**
 * The tax and exchange rates that the first migration puts into their dated tables.
 *
 * Standard VAT rates of the EU members and the United Kingdom, from memory, as configuration: an operator checks them
 * before selling, and corrects them by adding rows with later dates. Exchange rates are placeholders of the same kind.
 * Not tax advice.
 */

export interface TaxRate {
  /** ISO 3166-1 alpha-2. */
  country: string;
  /** Hundredths of a percent: 2000 is 20 %. */
  rateHundredths: number;
  /** The rate holds from this day until the next row of the country. */
  validFrom: string;
}

const since = (validFrom: string, rates: Record<string, number>): TaxRate[] =>
  Object.entries(rates).map(([country, percent]) => ({
    country,
    rateHundredths: Math.round(percent * 100),
    validFrom,
  }));

export const standardRates: TaxRate[] = [
  ...since('2024-01-01', {
    AT: 20,
    BE: 21,
    BG: 20,
    HR: 25,
    CY: 19,
    CZ: 21,
    DK: 25,
    EE: 22,
    FI: 24,
    FR: 20,
    DE: 19,
    GR: 24,
    HU: 27,
    IE: 23,
    IT: 22,
    LV: 21,
    LT: 21,
    LU: 17,
    MT: 18,
    NL: 21,
    PL: 23,
    PT: 23,
    RO: 19,
    SK: 20,
    SI: 22,
    ES: 21,
    SE: 25,
    GB: 20,
  }),
  ...since('2024-09-01', { FI: 25.5 }),
  ...since('2025-01-01', { SK: 23 }),
  ...since('2025-07-01', { EE: 24 }),
  ...since('2025-08-01', { RO: 21 }),
];

export interface ExchangeRate {
  fromCurrency: string;
  toCurrency: string;
  /** Millionths of a unit of `toCurrency` for one unit of `fromCurrency`. */
  rateMillionths: number;
  validFrom: string;
}

export const exchangeRates: ExchangeRate[] = [
  { fromCurrency: 'EUR', toCurrency: 'GBP', rateMillionths: 860_000, validFrom: '2026-01-01' },
  { fromCurrency: 'USD', toCurrency: 'GBP', rateMillionths: 750_000, validFrom: '2026-01-01' },
  { fromCurrency: 'GBP', toCurrency: 'EUR', rateMillionths: 1_162_800, validFrom: '2026-01-01' },
  { fromCurrency: 'USD', toCurrency: 'EUR', rateMillionths: 872_000, validFrom: '2026-01-01' },
];
