/** Checks a VAT number by the published format and check digits of its country. Whether it is registered is not checked here. */
import { vatCheckDigits } from './vat-check-digits.ts';

/** National part after the prefix. Sources: the formats published for the EU's VAT information exchange, from memory. */
const formats: Record<string, RegExp> = {
  AT: /^U\d{8}$/,
  BE: /^[01]\d{9}$/,
  BG: /^\d{9,10}$/,
  CY: /^\d{8}[A-Z]$/,
  CZ: /^\d{8,10}$/,
  DE: /^[1-9]\d{8}$/,
  DK: /^\d{8}$/,
  EE: /^\d{9}$/,
  EL: /^\d{9}$/,
  ES: /^([A-Z]\d{7}[A-Z\d]|\d{8}[A-Z])$/,
  FI: /^\d{8}$/,
  FR: /^[A-HJ-NP-Z\d]{2}\d{9}$/,
  GB: /^(\d{9}|\d{12}|GD[0-4]\d{2}|HA[5-9]\d{2})$/,
  HR: /^\d{11}$/,
  HU: /^\d{8}$/,
  IE: /^(\d{7}[A-W][A-I]?|\d[A-Z+*]\d{5}[A-W])$/,
  IT: /^\d{11}$/,
  LT: /^(\d{9}|\d{12})$/,
  LU: /^\d{8}$/,
  LV: /^\d{11}$/,
  MT: /^\d{8}$/,
  NL: /^\d{9}B\d{2}$/,
  PL: /^\d{10}$/,
  PT: /^\d{9}$/,
  RO: /^[1-9]\d{1,9}$/,
  SE: /^\d{10}01$/,
  SI: /^[1-9]\d{7}$/,
  SK: /^[1-9]\d{9}$/,
};

export type CheckedVatNumber = { ok: true; vatNumber: string } | { ok: false; reason: string };

/**
 * Takes spaces, dots and hyphens out and checks prefix, format and check digits.
 * `country` is ISO 3166-1 alpha-2; Greece's numbers begin with EL. Numbers of countries outside the table are kept as
 * they are, bounded in length.
 */
export function checkVatNumber(given: string, country: string): CheckedVatNumber {
  const vatNumber = given.toUpperCase().replaceAll(/[\s.-]/g, '');
  const prefix = country === 'GR' ? 'EL' : country;
  const format = formats[prefix];
  if (!format)
    return /^[A-Z0-9]{2,20}$/.test(vatNumber)
      ? { ok: true, vatNumber }
      : { ok: false, reason: 'A VAT or tax number has up to 20 letters and digits.' };
  if (!vatNumber.startsWith(prefix))
    return { ok: false, reason: `A VAT number of this country begins with ${prefix}.` };
  const national = vatNumber.slice(2);
  if (!format.test(national)) return { ok: false, reason: `This is not how a VAT number of ${prefix} is written.` };
  if (vatCheckDigits[prefix]?.(national) === false)
    return { ok: false, reason: 'The check digits of this VAT number are wrong. Look for a typing error.' };
  return { ok: true, vatNumber };
}
