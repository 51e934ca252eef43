/** Money as typed into a field, exact to the minor unit. All our currencies have two decimals. */

export const moneyField = (amountMinor: number): string => (amountMinor / 100).toFixed(2).replace(/\.00$/, '');

/** "1,200.5" is 120,050 minor units; null when it is not an amount above 0. */
export function parseMoney(text: string): number | null {
  const match = /^(\d{1,9})(?:\.(\d{0,2}))?$/.exec(text.trim().replaceAll(/[, ]/g, ''));
  if (!match) return null;
  const minor = Number(match[1]) * 100 + Number((match[2] ?? '').padEnd(2, '0'));
  return minor > 0 ? minor : null;
}
