/** Checks a VAT number by the published format of its country. Whether it is registered is not checked here. */

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

/** Sum of digits × weights. */
const weighted = (digits: string, weights: readonly number[]): number =>
  weights.reduce((sum, weight, place) => sum + weight * Number(digits[place]), 0);

/** The Luhn check of a whole number, check digit last. */
function luhn(digits: string): boolean {
  const sum = [...digits].reverse().reduce((total, digit, place) => {
    const doubled = Number(digit) * (place % 2 === 1 ? 2 : 1);
    return total + (doubled > 9 ? doubled - 9 : doubled);
  }, 0);
  return sum % 10 === 0;
}

/** ISO 7064 mod 11,10: the check of Germany and Croatia. */
function mod11and10(digits: string): boolean {
  let product = 10;
  for (const digit of digits.slice(0, -1)) {
    const sum = (Number(digit) + product) % 10 || 10;
    product = (2 * sum) % 11;
  }
  return (11 - product) % 10 === Number(digits.at(-1));
}

/** Check digits of the countries whose rule is a plain sum; the others are checked by format. */
const checks: Record<string, (national: string) => boolean> = {
  BE: (n) => 97 - (Number(n.slice(0, 8)) % 97) === Number(n.slice(8)),
  DE: mod11and10,
  DK: (n) => weighted(n, [2, 7, 6, 5, 4, 3, 2, 1]) % 11 === 0,
  EE: (n) => weighted(n, [3, 7, 1, 3, 7, 1, 3, 7, 1]) % 10 === 0,
  EL: (n) => (weighted(n, [256, 128, 64, 32, 16, 8, 4, 2]) % 11) % 10 === Number(n[8]),
  FI: (n) => weighted(n, [7, 9, 10, 5, 8, 4, 2, 1]) % 11 === 0,
  FR: (n) =>
    !/^\d/.test(n) || !/^\d{11}$/.test(n) || (12 + 3 * (Number(n.slice(2)) % 97)) % 97 === Number(n.slice(0, 2)),
  GB: (n) => {
    if (!/^\d/.test(n)) return true;
    const sum = weighted(n, [8, 7, 6, 5, 4, 3, 2]) + Number(n.slice(7, 9));
    return sum % 97 === 0 || (sum + 55) % 97 === 0;
  },
  HR: mod11and10,
  HU: (n) => weighted(n, [9, 7, 3, 1, 9, 7, 3, 1]) % 10 === 0,
  IT: luhn,
  LU: (n) => Number(n.slice(0, 6)) % 89 === Number(n.slice(6)),
  MT: (n) => weighted(n, [3, 4, 6, 7, 8, 9, 10, 1]) % 37 === 0,
  PL: (n) => weighted(n, [6, 5, 7, 2, 3, 4, 5, 6, 7]) % 11 === Number(n[9]),
  PT: (n) => ((11 - (weighted(n, [9, 8, 7, 6, 5, 4, 3, 2]) % 11)) % 11) % 10 === Number(n[8]),
  SE: (n) => luhn(n.slice(0, 10)),
  SI: (n) => (11 - (weighted(n, [8, 7, 6, 5, 4, 3, 2]) % 11)) % 10 === Number(n[7]),
  SK: (n) => Number(n) % 11 === 0,
};

export type CheckedVatNumber = { ok: true; vatNumber: string } | { ok: false; reason: string };

/**
 * Takes spaces, dots and hyphens out and checks prefix, format and, where the rule is a plain sum, check digits.
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
  if (checks[prefix] && !checks[prefix](national))
    return { ok: false, reason: 'The check digits of this VAT number are wrong. Look for a typing error.' };
  return { ok: true, vatNumber };
}
