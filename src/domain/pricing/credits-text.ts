/** Microcredits in words for a person. */
import { microcreditsPerCredit } from './price-book.ts';

/**
 * `42.5 credits`, `1 credit`, `0.000001 credits`: exact by default; no grouping is lost and nothing is rounded away.
 * Amounts are integers, so the six decimals are all there is.
 */
export function creditsText(amountMicrocredits: number): string {
  const sign = amountMicrocredits < 0 ? '−' : '';
  const amount = Math.abs(amountMicrocredits);
  const wholeCredits = Math.floor(amount / microcreditsPerCredit).toLocaleString('en');
  const fraction = String(amount % microcreditsPerCredit)
    .padStart(6, '0')
    .replace(/0+$/, '');
  const figure = `${sign}${wholeCredits}${fraction ? `.${fraction}` : ''}`;
  return `${figure} ${amount === microcreditsPerCredit ? 'credit' : 'credits'}`;
}
