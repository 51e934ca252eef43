/** From the events of pilot replicates to what a job will cost: expected, and a 95 % prediction interval. */
import { chargeMicrocredits } from '../pricing/price-of.ts';
import { studentQuantile } from './student-quantile.ts';

export interface PilotOutcome {
  /** Events of each complete pilot replicate, in order. */
  eventsPerReplicate: ArrayLike<number>;
  /** Events of the replicate that the pilot's budget cut, so far; null when none was cut. */
  cutReplicateEvents: number | null;
}

export interface PilotSummary {
  /** Replicates that the estimate rests on; a cut one counts with the events it had. */
  replicates: number;
  mean: number;
  /** Between replicates; 0 for a single one. */
  sd: number;
  oneSided: boolean;
}

/** Mean and sd of events per replicate. A cut replicate enters with what it had, a lower bound: so mean is one too. */
export function summarisePilot(pilot: PilotOutcome): PilotSummary {
  const events = Array.from(pilot.eventsPerReplicate);
  if (pilot.cutReplicateEvents !== null) events.push(pilot.cutReplicateEvents);
  const m = events.length;
  if (m === 0) throw new Error('A pilot without replicates says nothing.');
  const mean = events.reduce((sum, value) => sum + value, 0) / m;
  const squares = events.reduce((sum, value) => sum + (value - mean) ** 2, 0);
  return {
    replicates: m,
    mean,
    sd: m > 1 ? Math.sqrt(squares / (m - 1)) : 0,
    oneSided: pilot.cutReplicateEvents !== null,
  };
}

/**
 * Standard error of the events of a cycle over `points` points that comes of looking at some of them only: the total of a simple
 * random sample without replacement (Cochran, Sampling Techniques, from memory). 0 when all were looked at.
 */
export function samplingError(meansAtSampledPoints: number[], points: number): number {
  const sampled = meansAtSampledPoints.length;
  if (sampled >= points || sampled < 2) return 0;
  const mean = meansAtSampledPoints.reduce((sum, value) => sum + value, 0) / sampled;
  const variance = meansAtSampledPoints.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (sampled - 1);
  return points * Math.sqrt(((1 - sampled / points) * variance) / sampled);
}

export interface EventsRange {
  expected: number;
  low: number;
  high: number;
}

/**
 * Total events of n further replicates, from m pilot ones: n·mean ± t·s·√(1/m + 1/n)·n with t the 97.5 % quantile of
 * Student's law with m − 1 degrees of freedom (the prediction interval for a mean of n future observations; Hahn &
 * Meeker, Statistical Intervals, from memory). With a single pilot replicate the spread is unknown: half to double.
 */
export function predictEvents(pilot: PilotSummary, replicates: number): EventsRange {
  const expected = pilot.mean * replicates;
  if (pilot.replicates < 2) return { expected, low: expected / 2, high: expected * 2 };
  const t = studentQuantile(0.975, pilot.replicates - 1);
  const half = t * pilot.sd * Math.sqrt(1 / pilot.replicates + 1 / replicates) * replicates;
  return { expected, low: Math.max(0, expected - half), high: expected + half };
}

export interface PriceRange {
  expected: number;
  low: number;
  high: number;
}

/** Microcredits of a range of events: `low` rounded down, `high` up, so that the range covers what will be charged. */
export function priceEvents(range: EventsRange, microcreditsPerMillionEvents: number): PriceRange {
  const price = (events: number) => chargeMicrocredits(BigInt(events), microcreditsPerMillionEvents);
  const high = price(Math.ceil(range.high));
  return {
    expected: price(Math.round(range.expected)),
    low: price(Math.floor(range.low)),
    // One more, since floor() may have dropped a fraction that the cap would then lack.
    high: microcreditsPerMillionEvents > 0 ? high + 1 : 0,
  };
}

/** The least cap a job may have: the upper estimate of `fewest` replicates, or of all when it has fewer. */
export function leastCap(options: {
  pilot: PilotSummary;
  replicates: number;
  fewest: number;
  microcreditsPerMillionEvents: number;
}): number {
  const range = predictEvents(options.pilot, Math.min(options.replicates, options.fewest));
  return priceEvents(range, options.microcreditsPerMillionEvents).high;
}

export interface QueueLoad {
  /** Worker seconds of queued and running work, by lane. */
  express: number;
  steady: number;
  overnight: number;
}

/**
 * Seconds until a job of `workSeconds` worker seconds would be finished in each lane. A lane waits for the lanes
 * before it; within a lane teams take turns, so half of what is there is expected to go first.
 */
export function secondsByLane(options: { workSeconds: number; load: QueueLoad; workers: number }): QueueLoad {
  const { workSeconds, load, workers } = options;
  const round = (seconds: number) => Math.ceil((seconds / workers) * 10) / 10;
  return {
    express: round(workSeconds + load.express / 2),
    steady: round(workSeconds + load.express + load.steady / 2),
    overnight: round(workSeconds + load.express + load.steady + load.overnight / 2),
  };
}

/** Rough size of the archive, from measured bytes per row of each file after compression. */
export function estimateArchiveBytes(options: {
  replicates: number;
  gridPoints: number;
  histogramTimes: number;
  observables: number;
  /** Default 1. */
  points?: number;
  keptTraces: number;
  documentBytes: number;
}): number {
  const { replicates, gridPoints, observables, points = 1, keptTraces } = options;
  const spread = Math.min(replicates, 60);
  return Math.round(
    6_000 +
      options.documentBytes * 0.5 +
      points *
        (gridPoints * observables * 45 +
          gridPoints * observables * 14 +
          options.histogramTimes * observables * spread * 5 +
          replicates * 5 +
          Math.min(keptTraces, replicates) * gridPoints * (2 + observables * 1.5)),
  );
}
