/**
 * Check digits of VAT numbers, by country. Source of every rule, from memory: the algorithms that the member states gave
 * to the European Commission for its VAT information exchange, and His Majesty's Revenue and Customs for GB.
 *
 * No check digit exists, and format alone is judged, for: nine-digit Czech birth numbers issued before 1954 (unless they
 * begin with 6), Latvian personal codes that begin with 32, and British government (GD) and health (HA) numbers.
 */

/** Sum of digits × weights. */
const weighted = (digits: string, weights: readonly number[]): number =>
  weights.reduce((sum, weight, place) => sum + weight * Number(digits[place]), 0);

const lastDigit = (digits: string): number => Number(digits.at(-1));

/** Sum of the digits, those at the given places (0 = every even place from the left) doubled and their digits added. */
const luhnSum = (digits: string, doubled: 0 | 1): number =>
  [...digits].reduce((total, digit, place) => {
    const value = Number(digit) * (place % 2 === doubled ? 2 : 1);
    return total + (value > 9 ? value - 9 : value);
  }, 0);

/** The Luhn check of a whole number, check digit last. */
const luhn = (digits: string): boolean => luhnSum(digits, digits.length % 2 === 0 ? 0 : 1) % 10 === 0;

/** ISO 7064 mod 11,10: the check of Germany and Croatia. */
function mod11and10(digits: string): boolean {
  let product = 10;
  for (const digit of digits.slice(0, -1)) {
    const sum = (Number(digit) + product) % 10 || 10;
    product = (2 * sum) % 11;
  }
  return (11 - product) % 10 === lastDigit(digits);
}

/** ISO 7064 mod 97,10 over letters and digits, letters as A = 10 … Z = 35. */
function mod97(text: string): number {
  let rest = 0;
  for (const character of text) {
    const value = parseInt(character, 36);
    rest = (rest * (value > 9 ? 100 : 10) + value) % 97;
  }
  return rest;
}

/** Companies by the first rule that gives a digit; ten digits are a person's, a foreigner's or another taxpayer's number. */
function bulgaria(n: string): boolean {
  if (n.length === 9) {
    const first = weighted(n, [1, 2, 3, 4, 5, 6, 7, 8]) % 11;
    const sum = first === 10 ? weighted(n, [3, 4, 5, 6, 7, 8, 9, 10]) % 11 : first;
    return sum % 10 === lastDigit(n);
  }
  const person = (weighted(n, [2, 4, 8, 5, 10, 9, 7, 3, 6]) % 11) % 10;
  const foreigner = weighted(n, [21, 19, 17, 13, 11, 9, 7, 3, 1]) % 10;
  const other = (11 - (weighted(n, [4, 3, 2, 7, 6, 5, 4, 3, 2]) % 11)) % 11;
  return [person, foreigner, other].includes(lastDigit(n));
}

const cypriotOddDigits = [1, 0, 5, 7, 9, 13, 15, 17, 19, 21];
function cyprus(n: string): boolean {
  const sum = [...n.slice(0, 8)].reduce(
    (total, digit, place) => total + (place % 2 === 0 ? cypriotOddDigits[Number(digit)]! : Number(digit)),
    0,
  );
  return !n.startsWith('12') && String.fromCharCode(65 + (sum % 26)) === n[8];
}

function czechia(n: string): boolean {
  const weights = [8, 7, 6, 5, 4, 3, 2];
  if (n.length === 8) return n[0] !== '9' && (11 - (weighted(n, weights) % 11)) % 10 === lastDigit(n);
  if (n.length === 10) return (Number(n.slice(0, 9)) % 11) % 10 === lastDigit(n);
  if (n[0] !== '6') return true;
  const rest = weighted(n.slice(1), weights) % 11;
  return (8 - ((10 - rest) % 11) + 10) % 10 === lastDigit(n);
}

function spain(n: string): boolean {
  const letterOf = (digits: string): string => 'TRWAGMYFPDXBNJZSQVHLCKE'[Number(digits) % 23]!;
  if (/^\d/.test(n)) return letterOf(n.slice(0, 8)) === n[8];
  if (/^[XYZ]/.test(n)) return letterOf(`${'XYZ'.indexOf(n[0]!)}${n.slice(1, 8)}`) === n[8];
  if (/^[KLM]/.test(n)) return letterOf(n.slice(1, 8)) === n[8];
  const check = (10 - (luhnSum(n.slice(1, 8), 0) % 10)) % 10;
  const byLetter = 'JABCDEFGHI'[check] === n[8];
  const byDigit = String(check) === n[8];
  if (/^[NPQRSW]/.test(n)) return byLetter;
  return /^[ABEH]/.test(n) ? byDigit : byLetter || byDigit;
}

/** A key of two digits over the company's number, or one with letters (without I and O); the company's number is a Luhn one but for Monaco's. */
function france(n: string): boolean {
  const company = n.slice(2);
  if (!company.startsWith('000') && !luhn(company)) return false;
  if (/^\d\d/.test(n)) return (12 + 3 * (Number(company) % 97)) % 97 === Number(n.slice(0, 2));
  const alphabet = '0123456789ABCDEFGHJKLMNPQRSTUVWXYZ';
  const [first = 0, second = 0] = [...n.slice(0, 2)].map((character) => alphabet.indexOf(character));
  const key = /^\d/.test(n) ? first * 24 + second - 10 : first * 34 + second - 100;
  return (Number(company) + 1 + Math.floor(key / 11)) % 11 === key % 11;
}

function britain(n: string): boolean {
  if (!/^\d/.test(n)) return true;
  const sum = weighted(n, [8, 7, 6, 5, 4, 3, 2]) + Number(n.slice(7, 9));
  return sum % 97 === 0 || (sum + 55) % 97 === 0;
}

/** The check letter counts from W = 0; older numbers have a sign or letter in the second place, which moves. */
function ireland(n: string): boolean {
  const alphabet = 'WABCDEFGHIJKLMNOPQRSTUV';
  const digits = /^\d{7}/.test(n) ? n : `0${n.slice(2, 7)}${n[0]}`;
  const sum = weighted(digits, [8, 7, 6, 5, 4, 3, 2]) + 9 * (n[8] ? alphabet.indexOf(n[8]) : 0);
  return alphabet[sum % 23] === n[7];
}

/** Companies have nine digits with a 1 before the check digit, temporary numbers twelve. */
function lithuania(n: string): boolean {
  const body = [...n.slice(0, -1)];
  const sum = (shift: number) =>
    body.reduce((total, digit, place) => total + (1 + ((place + shift) % 9)) * Number(digit), 0) % 11;
  const first = sum(0);
  return n.at(-2) === '1' && (first === 10 ? sum(2) % 10 : first) === lastDigit(n);
}

function latvia(n: string): boolean {
  if (n[0]! > '3') return weighted(n, [9, 1, 4, 8, 3, 10, 2, 5, 7, 6, 1]) % 11 === 3;
  if (n.startsWith('32')) return true;
  return ((1 + weighted(n, [10, 5, 8, 4, 2, 1, 6, 3, 7, 9])) % 11) % 10 === lastDigit(n);
}

/** By country prefix; each takes the part after it, whose format has been checked. */
export const vatCheckDigits: Record<string, (national: string) => boolean> = {
  AT: (n) => (10 - ((luhnSum(n.slice(1, 8), 1) + 4) % 10)) % 10 === lastDigit(n),
  BE: (n) => 97 - (Number(n.slice(0, 8)) % 97) === Number(n.slice(8)),
  BG: bulgaria,
  CY: cyprus,
  CZ: czechia,
  DE: mod11and10,
  DK: (n) => weighted(n, [2, 7, 6, 5, 4, 3, 2, 1]) % 11 === 0,
  EE: (n) => weighted(n, [3, 7, 1, 3, 7, 1, 3, 7, 1]) % 10 === 0,
  EL: (n) => (weighted(n, [256, 128, 64, 32, 16, 8, 4, 2]) % 11) % 10 === lastDigit(n),
  ES: spain,
  FI: (n) => weighted(n, [7, 9, 10, 5, 8, 4, 2, 1]) % 11 === 0,
  FR: france,
  GB: britain,
  HR: mod11and10,
  HU: (n) => weighted(n, [9, 7, 3, 1, 9, 7, 3, 1]) % 10 === 0,
  IE: ireland,
  IT: luhn,
  LT: lithuania,
  LU: (n) => Number(n.slice(0, 6)) % 89 === Number(n.slice(6)),
  LV: latvia,
  MT: (n) => weighted(n, [3, 4, 6, 7, 8, 9, 10, 1]) % 37 === 0,
  // By the company's number until 2019; sole traders have had numbers of their own since, checked as a whole.
  NL: (n) => weighted(n, [9, 8, 7, 6, 5, 4, 3, 2]) % 11 === Number(n[8]) || mod97(`NL${n}`) === 1,
  PL: (n) => weighted(n, [6, 5, 7, 2, 3, 4, 5, 6, 7]) % 11 === lastDigit(n),
  PT: (n) => ((11 - (weighted(n, [9, 8, 7, 6, 5, 4, 3, 2]) % 11)) % 11) % 10 === lastDigit(n),
  RO: (n) => ((10 * weighted(n.slice(0, -1).padStart(9, '0'), [7, 5, 3, 2, 1, 7, 5, 3, 2])) % 11) % 10 === lastDigit(n),
  SE: (n) => luhn(n.slice(0, 10)),
  // A remainder of 0 would need the digit 11: such numbers are not issued.
  SI: (n) => 11 - (weighted(n, [8, 7, 6, 5, 4, 3, 2]) % 11) === (lastDigit(n) || 10),
  SK: (n) => Number(n) % 11 === 0,
};
