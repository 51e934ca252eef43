/** Cuts a run of replicates into batches: contiguous, of about a second's work each, bounded in number. */
import { limits } from '../limits.ts';

/** A range of replicates, of every point of the job. */
export interface PlannedBatch {
  ordinal: number;
  firstReplicate: number;
  replicateCount: number;
}

/** Work units that a worker does in about a second on a common machine; one event is one unit. */
export const unitsPerBatch = 20_000_000;
/** Below this a batch is mostly overhead. */
const unitsPerBatchLeast = 1_000_000;
/** A job smaller than that many full batches is cut into about this many, so that threads share it and progress shows. */
const batchesWished = 8;
/** Writing one count at one grid time costs about as much as this many events. */
const unitsPerCell = 0.5;
const unitsPerReplicate = 20;
/** Keeps a batch's list of events per replicate, and its file, small. */
export const replicatesPerBatch = 100_000;

/** Work units of one replicate at every point: its events and what recording it on the grid costs. */
export const unitsOf = (options: {
  eventsPerReplicate: number;
  gridPoints: number;
  observables: number;
  points?: number;
}): number => {
  const { eventsPerReplicate, gridPoints, observables, points = 1 } = options;
  return eventsPerReplicate + points * (unitsPerCell * gridPoints * observables + unitsPerReplicate);
};

/**
 * Batches of replicates firstReplicate … firstReplicate + replicates − 1 of all points, in order and without gaps.
 * The plan depends on expected events, never on a clock, and shapes no result: any other cut gives the same ones.
 */
export function planBatches(options: {
  firstReplicate: number;
  replicates: number;
  /** Expected events of one replicate, over all points. */
  eventsPerReplicate: number;
  gridPoints: number;
  observables: number;
  /** Points of the job; default 1. */
  points?: number;
  firstOrdinal?: number;
  /** Numbers of replicates at which a batch must end (looks of a precision target). */
  endsAt?: readonly number[];
  /** Default `unitsPerBatch`; tests use others. */
  unitsPerBatchMost?: number;
}): PlannedBatch[] {
  const { firstReplicate, replicates, points = 1, firstOrdinal = 0 } = options;
  const most = options.unitsPerBatchMost ?? unitsPerBatch;
  const units = unitsOf(options);
  const target = Math.min(most, Math.max(Math.min(unitsPerBatchLeast, most), (units * replicates) / batchesWished));
  const wished = Math.min(
    Math.max(1, Math.floor(replicatesPerBatch / points)),
    Math.max(1, Math.floor(target / units)),
  );
  // Only jobs beyond limits.batchesPerJob full batches get longer ones.
  const size = Math.max(wished, Math.ceil(replicates / limits.batchesPerJob));
  const batches: PlannedBatch[] = [];
  const end = firstReplicate + replicates;
  const ends = [...(options.endsAt ?? []).filter((at) => at > firstReplicate && at < end), end];
  let start = firstReplicate;
  for (const next of ends)
    for (; start < next; start += batches.at(-1)!.replicateCount)
      batches.push({
        ordinal: firstOrdinal + batches.length,
        firstReplicate: start,
        replicateCount: Math.min(size, next - start),
      });
  return batches;
}
