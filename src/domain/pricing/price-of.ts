/** The charge of events at a price: exact integer arithmetic, rounded down once on the running total. */

/**
 * floor(events × microcreditsPerMillionEvents / 1,000,000), in microcredits.
 *
 * Call it with the running total of a segment and charge the difference to what was charged before, so that splitting
 * a job into batches never changes its price. Throws when the charge leaves ±(2^53 − 1) or an argument is no
 * non-negative integer.
 */
export function chargeMicrocredits(events: bigint | number, microcreditsPerMillionEvents: bigint | number): number {
  const total = BigInt(events);
  const rate = BigInt(microcreditsPerMillionEvents);
  if (total < 0n || rate < 0n) throw new Error('Events and rates are never negative.');
  const charge = (total * rate) / 1_000_000n;
  if (charge > BigInt(Number.MAX_SAFE_INTEGER)) throw new Error('The charge is larger than the ledger can hold.');
  return Number(charge);
}
