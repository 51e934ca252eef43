/** The cap's cut: how many replicates, in order, can be delivered before the next one would cost more than is left. */
import { chargeMicrocredits } from '../pricing/price-of.ts';

export interface Prefix {
  replicates: number;
  /** Events of those replicates. */
  events: number;
}

/**
 * The most events a segment may hold under its cap: the largest e with floor(e · rate / 1e6) ≤ cap.
 * A rate of 0 has no such bound: null.
 */
export function eventsWithinCap(capMicrocredits: number, microcreditsPerMillionEvents: number): bigint | null {
  if (microcreditsPerMillionEvents === 0) return null;
  const cap = BigInt(capMicrocredits);
  const rate = BigInt(microcreditsPerMillionEvents);
  // floor(e·r/1e6) ≤ c  ⇔  e·r < (c + 1)·1e6
  return ((cap + 1n) * 1_000_000n - 1n) / rate;
}

/**
 * The longest prefix of `eventsPerReplicate` whose charge, on the segment's running total, stays within the cap.
 * Nothing past the first replicate that does not fit counts, even when a later and cheaper one would: given how many
 * fit they are then exchangeable, and a mean over them is not biased by the cap.
 */
export function longestPrefix(options: {
  eventsPerReplicate: ArrayLike<number>;
  /** Events of the segment delivered before. */
  segmentEvents: number | bigint;
  capMicrocredits: number;
  microcreditsPerMillionEvents: number;
}): Prefix {
  const { eventsPerReplicate } = options;
  const bound = eventsWithinCap(options.capMicrocredits, options.microcreditsPerMillionEvents);
  const before = BigInt(options.segmentEvents);
  let events = 0n;
  let replicates = 0;
  for (; replicates < eventsPerReplicate.length; replicates++) {
    const longer = events + BigInt(eventsPerReplicate[replicates]!);
    if (bound !== null && before + longer > bound) break;
    events = longer;
  }
  return { replicates, events: Number(events) };
}

/** What `events` more cost on top of the segment's running total, in microcredits. */
export function chargeOfJoining(options: {
  segmentEvents: number;
  events: number;
  microcreditsPerMillionEvents: number;
}): number {
  const { segmentEvents, events, microcreditsPerMillionEvents: rate } = options;
  return (
    chargeMicrocredits(BigInt(segmentEvents) + BigInt(events), rate) - chargeMicrocredits(BigInt(segmentEvents), rate)
  );
}
