/** Money and dates in words on documents and in mails. */

/** `EUR 1,234.50`; all currencies sold in have two decimals. */
export function moneyText(amountMinor: number, currency: string): string {
  const sign = amountMinor < 0 ? '−' : '';
  const amount = Math.abs(amountMinor);
  return `${currency} ${sign}${Math.floor(amount / 100).toLocaleString('en')}.${String(amount % 100).padStart(2, '0')}`;
}

const day = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', year: 'numeric', timeZone: 'UTC' });

/** `1 December 2026`, of an RFC 3339 time, in UTC. */
export const dayText = (at: string): string => day.format(new Date(at));
