/** Credits, money, counts and times as people read them. Values stay integers until the last step. */
import { microcreditsPerCredit } from '@/domain/pricing/price-book.ts';

const locale = 'en-GB';

export type Rounding = 'nearest' | 'down' | 'up';

const rounders: Record<Rounding, (value: number) => number> = { nearest: Math.round, down: Math.floor, up: Math.ceil };

/**
 * "312", "18.2", "0.043": as many decimals as the size deserves, at most six. Without the unit.
 * Say "available" rounded down and "needed" rounded up, so that the reader is never promised too much.
 */
export function creditsText(microcredits: number, rounding: Rounding = 'nearest'): string {
  const size = Math.abs(microcredits) / microcreditsPerCredit;
  const decimals = size === 0 || size >= 100 ? 0 : size >= 10 ? 1 : size >= 1 ? 2 : size >= 0.01 ? 3 : 6;
  const step = 10 ** (6 - decimals);
  const rounded = (rounders[rounding](microcredits / step) * step) / microcreditsPerCredit;
  return rounded.toLocaleString(locale, { maximumFractionDigits: decimals });
}

/** All digits, for the ledger: at least `leastDecimals`, up to six. In columns six, so that the points stand in line. */
export function exactCreditsText(microcredits: number, leastDecimals = 2): string {
  const sign = microcredits < 0 ? '−' : '';
  const whole = Math.floor(Math.abs(microcredits) / microcreditsPerCredit);
  const rest = String(Math.abs(microcredits) % microcreditsPerCredit)
    .padStart(6, '0')
    .replace(/0+$/, '')
    .padEnd(leastDecimals, '0');
  return `${sign}${whole.toLocaleString(locale)}.${rest}`;
}

export const creditsUnit = (microcredits: number): string =>
  microcredits === microcreditsPerCredit ? 'credit' : 'credits';

/** Money from integer minor units and an ISO 4217 code: "€1,250.00". */
export function moneyText(amountMinor: number, currency: string): string {
  const format = new Intl.NumberFormat(locale, { style: 'currency', currency, currencyDisplay: 'narrowSymbol' });
  const decimals = format.resolvedOptions().maximumFractionDigits ?? 2;
  return format.format(amountMinor / 10 ** decimals);
}

export const countText = (count: number): string => count.toLocaleString(locale);

/** "1,800", "18.2 million", "3.4 billion": for headings; tables show every digit. */
export function roughCountText(count: number): string {
  const scales: [number, string][] = [
    [1e12, 'trillion'],
    [1e9, 'billion'],
    [1e6, 'million'],
  ];
  const scale = scales.find(([size]) => count >= size);
  if (!scale) return countText(Math.round(count));
  return `${Number((count / scale[0]).toPrecision(3)).toLocaleString(locale)} ${scale[1]}`;
}

/** "about 40 s", "about 3 min", "about 2 h 10 min": deliberately coarse, so that it does not jump. */
export function durationText(seconds: number): string {
  if (seconds < 1) return 'under 1 s';
  if (seconds < 10) return `about ${Math.round(seconds)} s`;
  if (seconds < 90) return `about ${Math.round(seconds / 5) * 5} s`;
  const minutes = Math.round(seconds / 60);
  if (minutes < 60) return `about ${minutes} min`;
  const hours = Math.floor(minutes / 60);
  if (hours < 48) return `about ${hours} h${minutes % 60 >= 5 ? ` ${Math.round((minutes % 60) / 5) * 5} min` : ''}`;
  return `about ${Math.round(hours / 24)} days`;
}

/** 1 kB = 1000 bytes. */
export function bytesText(bytes: number): string {
  const scales: [number, string][] = [
    [1e9, 'GB'],
    [1e6, 'MB'],
    [1e3, 'kB'],
  ];
  const scale = scales.find(([size]) => bytes >= size);
  return scale
    ? `${Number((bytes / scale[0]).toPrecision(3)).toLocaleString(locale)} ${scale[1]}`
    : `${countText(bytes)} bytes`;
}

/** "1 Dec 2026" in the team's time zone. */
export const dayText = (time: string, timeZone = 'UTC'): string =>
  new Date(time).toLocaleDateString(locale, { day: 'numeric', month: 'short', year: 'numeric', timeZone });

/** "1 Dec 2026, 14:05 UTC". */
export const momentText = (time: string, timeZone = 'UTC'): string =>
  new Date(time).toLocaleString(locale, {
    day: 'numeric',
    month: 'short',
    year: 'numeric',
    hour: '2-digit',
    minute: '2-digit',
    timeZone,
    timeZoneName: 'short',
  });
