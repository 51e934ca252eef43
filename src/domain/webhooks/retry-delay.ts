/** When an undelivered webhook is tried again: 15 attempts over about two days, so that a weekend's outage loses little. */
export const deliveryAttempts = 15;
const firstDelayMs = 30_000;
const longestDelayMs = 6 * 60 * 60 * 1000;

/** Milliseconds after attempt number `attempts` (from 1) failed; null: that was the last. */
export const retryDelayMs = (attempts: number): number | null =>
  attempts >= deliveryAttempts ? null : Math.min(longestDelayMs, firstDelayMs * 2 ** (attempts - 1));
