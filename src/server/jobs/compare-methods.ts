/** The side-by-side of a leap quote: the exact pilot of the same inputs beside the leaped one. */
import type { Pilot } from '@db/models/jobs.ts';
import type { MethodComparison } from '@/contracts/jobs.ts';
import { compareMeans, type MethodPilot } from '@/domain/jobs/method-comparison.ts';
import { predictEvents, priceEvents, type PilotSummary } from '@/domain/jobs/quote-estimate.ts';
import { rateOf, type MethodFamily, type PriceBook } from '@/domain/pricing/price-book.ts';
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import { pointsOf } from '@/domain/jobs/sweep.ts';
import { runPilot, type PilotOptions } from './run-pilot.ts';

/**
 * Null for the exact method. An exact pilot that cannot run (its events run over, the member's pilots of the hour are used up) leaves
 * its place empty, with the reason: the leaped quote stands by itself.
 */
export async function compareMethods(
  options: PilotOptions,
  leaped: Pilot,
  book: PriceBook,
): Promise<MethodComparison | null> {
  const { inputs } = options;
  if (inputs.method !== 'leap') return null;
  const { epsilon: _, ...shared } = inputs;
  const ran = await runPilot({ ...options, inputs: { ...shared, method: 'exact' } });
  const leap = ofPilot(leaped, inputs, 'leap', book);
  if (!ran.ok)
    return { exact: null, exactRefused: ran.detail, leap, leapDearer: null, leapSlower: null, observables: [] };
  const exact = ofPilot(ran.value.pilot, inputs, 'exact', book);
  return {
    exact,
    exactRefused: null,
    leap,
    leapDearer: leap.microcredits >= exact.microcredits,
    leapSlower: leap.secondsPerReplicate >= exact.secondsPerReplicate,
    observables: compareMeans(meansOf(ran.value.pilot), meansOf(leaped)),
  };
}

function ofPilot(pilot: Pilot, inputs: JobInputs, method: MethodFamily, book: PriceBook) {
  const { replicates, lane } = inputs;
  // A sweep's pilot counts a replicate of every point together.
  const points = pointsOf(inputs);
  const rate = rateOf(book, lane, method);
  const summary: PilotSummary = { ...pilot.get(), oneSided: pilot.cutReplicates > 0 };
  return {
    pilotReplicates: pilot.replicates,
    eventsPerReplicate: { mean: pilot.mean / points, sd: pilot.sd / points },
    /** A cut replicate counts with what it had, so events and price are then lower bounds. */
    oneSided: summary.oneSided,
    microcreditsPerMillionEvents: rate,
    microcredits: priceEvents(predictEvents(summary, replicates), rate).expected,
    secondsPerReplicate: pilot.secondsPerReplicate / points,
  };
}

/** The replicate that was cut has no state at the horizon. */
const meansOf = ({ replicates, cutReplicates, atHorizon }: Pilot): MethodPilot => ({
  replicates: replicates - cutReplicates,
  atHorizon: atHorizon ?? [],
});
