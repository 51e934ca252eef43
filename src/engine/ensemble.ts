/**
 * The engine's interface: what a batch is asked, what it answers, and how answers join into an ensemble.
 *
 * A batch is a contiguous range of seeded replicates of one point. Its answer depends only on the task: not on the
 * machine, the number of threads, the batch's size or the clock. Jobs, the browser's preview and `verify` use this
 * interface alone.
 */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BlockShare } from './statistics/blocks.ts';

export type StreamPurpose = 'job' | 'pilot' | 'preview' | 'modes';
export type KernelName =
  | 'direct-scalar'
  | 'direct-simd'
  | 'composition-rejection'
  | 'tau-leaping'
  /** Plain and slow: of the direct method, of composition-rejection, and of tau-leaping. */
  | 'reference'
  | 'composition-rejection-reference'
  | 'tau-leaping-reference';

/**
 * A first passage: when the observable first is at least (`rises_to`) or at most (`falls_to`) the threshold. Looked at at
 * time 0, after each firing and after each change (all of one moment together). Extinction of a species is `falls_to` 0.
 */
export interface Passage {
  /** Index in the network's observables. */
  observable: number;
  direction: 'rises_to' | 'falls_to';
  threshold: number;
}

export interface BatchTask {
  network: ResolvedNetwork;
  /** Simulated time at the end of each replicate, in the network's unit of time; above 0. */
  horizon: number;
  /** Grid time i is i · horizon / gridIntervals, i = 0 … gridIntervals. */
  gridIntervals: number;
  /** u64 as a decimal string. */
  seed: string;
  purpose: StreamPurpose;
  point: number;
  firstReplicate: number;
  replicateCount: number;
  /** Replicates 0 … keptTraces − 1 of the point are kept whole on the grid (those that fall inside this batch). */
  keptTraces: number;
  /** First passages to time; none when left out. */
  passages?: Passage[];
  /** Pairs of counts, by their places among the network's observables, whose covariance is wanted; none when left out. */
  pairs?: [number, number][];
  /** Fails the replicate that would exceed it; null for none. A property of the job, never of the batch. */
  eventBudgetPerReplicate: number | null;
  /** Stops the batch early after this many events in all, keeping complete replicates (pilots); null for none. */
  eventBudgetPerBatch: number | null;
  /**
   * Tau-leaping with this ε, above 0 and at most 0.5: by how much of itself a propensity may change in a leap. Left out: exact.
   * Networks with triggered changes do not leap.
   */
  epsilon?: number;
  /** Whether the answer carries the batch's share of the blocks (statistics/blocks.ts); default no. */
  blocks?: boolean;
  /** For tests; normally a fixed, versioned function of the network decides. */
  kernel?: KernelName;
}

/** The model's own failure: the ensemble is the prefix before `replicate`, conditional on no failure. */
export interface ModelFailure {
  kind:
    | 'negative_propensity'
    | 'not_a_number'
    | 'count_overflow'
    | 'event_budget'
    /** A change set a count that is no whole number from 0 to 2^31 − 1, or a parameter that is no number. */
    | 'bad_assignment'
    /** Triggered changes set each other off without an end. */
    | 'change_cascade';
  replicate: number;
  reaction: string | null;
  /** The change that could not be made; absent where no change is the cause. */
  change?: string;
  time: number;
  state: Record<string, number>;
}

export interface BatchResult {
  firstReplicate: number;
  /** Complete replicates, from `firstReplicate`: less than asked after a failure or when the batch budget ran out. */
  replicateCount: number;
  /** Events of each complete replicate, in order: what the meter charges. Firings, or the work of leaps (leaping/tau-leaping.ts). */
  eventsPerReplicate: Float64Array;
  /** The mergeable accumulators of the complete replicates. */
  summary: EnsembleSummary;
  /** Kept traces that fell in this batch. */
  traces: Trace[];
  /** Times of first passage, passages × replicateCount, passage by passage; Infinity where not passed by the horizon. */
  passageTimes: Float64Array;
  failure: ModelFailure | null;
  kernel: KernelName;
  /** Null unless the task asked for it. */
  blocks: BlockShare | null;
}

export interface Trace {
  replicate: number;
  /** observables × (gridIntervals + 1), observable by observable. */
  values: Float64Array;
}

/**
 * Order-independent, exactly mergeable statistics of a set of replicates of one point.
 * `statistics/summary.ts` implements it: create, add, merge, encode to bytes, decode.
 * Merging the same replicates in any grouping and order gives the same encoded bytes.
 */
export interface EnsembleSummary {
  readonly replicates: number;
  readonly observables: string[];
  readonly gridPoints: number;
  merge(other: EnsembleSummary): void;
  encode(): Uint8Array;
}

/** Estimates with their errors, at every grid time: what `results/summary.csv` and the job page show. */
export interface EnsembleStatistics {
  replicates: number;
  times: number[];
  observables: {
    id: string;
    mean: number[];
    sd: number[];
    meanStandardError: number[];
    sdStandardError: number[];
    /** Variance / mean and sd / mean, with their errors; NaN where the mean is 0. */
    fano: number[];
    fanoStandardError: number[];
    cv: number[];
    cvStandardError: number[];
    /** By probability as a decimal string: "0.05", "0.25", "0.5", "0.75", "0.95". Type 1 (inverse of the distribution). */
    quantiles: Record<string, number[]>;
  }[];
  events: { total: number; meanPerReplicate: number; sdPerReplicate: number };
}

/** The distribution of one observable at one grid time. `widths[i]` is 1 where the count is exact. */
export interface Distribution {
  values: number[];
  widths: number[];
  counts: number[];
}
