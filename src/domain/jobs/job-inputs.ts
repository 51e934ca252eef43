/** What defines a job's results, as a quote pins it, and how a job ends. */
import type { Overrides } from '../network/document.ts';
import type { Lane, MethodFamily } from '../pricing/price-book.ts';
import type { FinalState } from './job-state.ts';
import type { PrecisionTarget } from './precision.ts';
import type { Sweep } from './sweep.ts';

/** A first passage to note: when the observable is first at least, or at most, the threshold. */
export interface PassageInput {
  /** Id of a species or a named quantity. */
  observable: string;
  direction: 'rises_to' | 'falls_to';
  threshold: number;
}

export interface JobInputs {
  /** At each point. */
  replicates: number;
  /** Simulated time, in the model's unit of time. */
  horizon: number;
  gridIntervals: number;
  method: MethodFamily;
  /** Of tau-leaping, and only there: by how much of itself a propensity may change in a leap. */
  epsilon?: number | undefined;
  /** u64 as a decimal string. */
  seed: string;
  lane: Lane;
  /** The scenario: at every point. */
  overrides: Overrides;
  sweep?: Sweep | undefined;
  keptTraces: number;
  /** None when left out. */
  passages?: PassageInput[] | undefined;
  /** Ids of observables, all counts, whose covariances are noted; none when left out. */
  correlations?: string[] | undefined;
  /** Fails the replicate that would exceed it. */
  eventBudgetPerReplicate: number;
  /** Ends the job before `replicates` once a mean is known well enough; shapes no replicate. */
  stopping?: PrecisionTarget | undefined;
}

/** The model's own failure, as the engine reports it. */
export interface BatchFailure {
  kind:
    'negative_propensity' | 'not_a_number' | 'count_overflow' | 'event_budget' | 'bad_assignment' | 'change_cascade';
  replicate: number;
  /** Of a sweep; absent or 0 without one. */
  point?: number | undefined;
  reaction: string | null;
  /** The timed or triggered change that could not be made; absent where none is the cause. */
  change?: string | undefined;
  time: number;
  state: Record<string, number>;
}

export type StopReason =
  | 'replicates_reached'
  | 'precision_reached'
  | 'cap_reached'
  | 'cancelled'
  | BatchFailure['kind']
  /** Work of ours was lost again and again. */
  | 'our_failure';

/** How a job ends: settled with its last batch, in force once results and archive are written. */
export interface JobEnding {
  state: FinalState;
  reason: StopReason;
  detail: string;
  failure: BatchFailure | null;
}

/** Where a failure happened, in words. */
export function describeFailure(failure: BatchFailure): string {
  const what = {
    negative_propensity: `the propensity of ${failure.reaction} became negative`,
    not_a_number: `the propensity of ${failure.reaction} was no number`,
    count_overflow: `a count passed 2,147,483,647 when ${failure.reaction} fired`,
    event_budget: 'the replicate needed more events than a replicate may have',
    bad_assignment: `the change ${failure.change} would have set a count that is no whole number from 0 to 2,147,483,647, or a parameter that is no number`,
    change_cascade: `triggered changes set each other off without an end, ${failure.change} among them`,
  }[failure.kind];
  return (
    `Replicate ${failure.replicate}${failure.point === undefined ? '' : ` at point ${failure.point}`}: ${what}, at time ${failure.time}. ` +
    'The replicates before it were kept and charged; results are conditional on no failure.'
  );
}

/** True when replicates of `b` continue the sample of `a`: everything that shapes a replicate is equal. */
export function continuesSample(a: JobInputs, b: JobInputs): boolean {
  const shape = ({
    horizon,
    gridIntervals,
    method,
    epsilon,
    seed,
    overrides,
    sweep,
    keptTraces,
    passages,
    eventBudgetPerReplicate,
  }: JobInputs) =>
    JSON.stringify([
      horizon,
      gridIntervals,
      method,
      epsilon ?? null,
      seed,
      sortedEntries(overrides.parameters),
      sortedEntries(overrides.initialCounts),
      sortedEntries(overrides.changeTimes),
      sweep && [sweep.targets.map(({ kind, id }) => [kind, id]), sweep.values],
      keptTraces,
      (passages ?? []).map(({ observable, direction, threshold }) => [observable, direction, threshold]),
      eventBudgetPerReplicate,
    ]);
  return shape(a) === shape(b);
}

/** The entries of a record by name, so that the order in which they were written does not matter. */
export const sortedEntries = (record: Record<string, number> | undefined): [string, number][] =>
  Object.entries(record ?? {}).sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
