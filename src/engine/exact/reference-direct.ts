/**
 * A replicate in plain TypeScript: the oracle that the generated kernels are held against, and the finder of causes. How the
 * next reaction is chosen is the method's own; here stands that of the direct method.
 */
import { logarithm } from '../kernel/elementary/logarithm.ts';
import { evaluatePropensity, evaluateTerm, type StateValues } from '../kernel/evaluate.ts';
import { largestCount, largestTotal } from '../kernel/memory-layout.ts';
import { makeChange, settleTriggers, stateValues, type ChangeFault, type ScheduledChange } from './changes.ts';
import type { PreparedNetwork } from '../kernel/prepared-network.ts';
import { uniform52, Xoshiro256, type Xoshiro256State } from '../random/xoshiro256.ts';

export interface ReferenceTask {
  prepared: PreparedNetwork;
  constants: Float64Array;
  /** The state at time 0, after the changes at it (changes.ts). */
  initialState: ArrayLike<number>;
  schedule: ScheduledChange[];
  gridTimes: Float64Array;
  generator: Xoshiro256State;
  /** Firings allowed. */
  eventLimit: number;
}

/** Why a replicate could not go on. `reaction` is an index, null where no single reaction is the cause. */
export interface Cause {
  kind: 'negative_propensity' | 'not_a_number' | 'count_overflow' | 'event_limit' | ChangeFault['kind'];
  reaction: number | null;
  /** Index of the change that could not be made; null where none is the cause. */
  change: number | null;
  time: number;
  counts: number[];
}

export interface ReferenceReplicate {
  firings: number;
  /** One row per grid point: the count observables. Not complete when there is a cause. */
  counts: number[][];
  /** One row per grid point: the other observables. */
  reals: number[][];
  /** Times of first passage; Infinity where not passed. */
  passages: number[];
  cause: Cause | null;
}

/** Prefix sums of the propensities, or the first reaction (null: their sum) that spoils them. */
export function prefixSums(
  prepared: PreparedNetwork,
  state: StateValues,
): number[] | { kind: 'negative_propensity' | 'not_a_number'; reaction: number | null } {
  const prefixes: number[] = [];
  let total = 0;
  for (const [index, reaction] of prepared.reactions.entries()) {
    const propensity = evaluatePropensity(reaction, state);
    if (propensity < 0) return { kind: 'negative_propensity', reaction: index };
    if (!(propensity < Infinity)) return { kind: 'not_a_number', reaction: index };
    total = index === 0 ? propensity : total + propensity;
    prefixes.push(total);
  }
  return total <= largestTotal ? prefixes : { kind: 'not_a_number', reaction: null };
}

export type BadPropensity = Exclude<ReturnType<typeof prefixSums>, number[]>;

/** How a method finds the next reaction of one replicate. */
export interface Selection {
  /**
   * Looks at the state after reaction `fired` (null: after anything) and answers the total propensity or what spoils it.
   */
  total(state: StateValues, fired: number | null): number | BadPropensity;
  /** The reaction that a uniform in [0, 1) chooses; further ones may be drawn. */
  choose(uniform: number, draw: () => number): number;
}

export function directSelection(prepared: PreparedNetwork): Selection {
  let prefixes: number[] = [];
  return {
    total(state) {
      const sums = prefixSums(prepared, state);
      if (!Array.isArray(sums)) return sums;
      prefixes = sums;
      return prefixes.at(-1) ?? 0;
    },
    choose(uniform) {
      const threshold = uniform * prefixes.at(-1)!;
      return prefixes.findIndex((prefix) => prefix > threshold);
    },
  };
}

/** Notes the passages that the present state, which began at `time`, makes for the first time. */
export function notePassages(prepared: PreparedNetwork, state: StateValues, passages: number[], time: number): void {
  prepared.passages.forEach(({ value, direction, threshold }, passage) => {
    if (passages[passage] !== Infinity) return;
    const present = evaluateTerm(value, state);
    if (direction === 'rises_to' ? present >= threshold : present <= threshold) passages[passage] = time;
  });
}

/** One replicate. */
export function runReferenceReplicate(
  task: ReferenceTask,
  selection = directSelection(task.prepared),
): ReferenceReplicate {
  const { prepared, constants, gridTimes, schedule } = task;
  const generator = new Xoshiro256(task.generator);
  const counts = Array.from(task.initialState);
  const passages = prepared.passages.map(() => Infinity);
  const replicate: ReferenceReplicate = { firings: 0, counts: [], reals: [], passages, cause: null };
  const fail = (kind: Cause['kind'], reaction: number | null, at: number): ReferenceReplicate => ({
    ...replicate,
    cause: { kind, reaction, change: null, time: at, counts: [...counts] },
  });
  const failAtChange = ({ kind, change }: ChangeFault, at: number): ReferenceReplicate => ({
    ...replicate,
    cause: { kind, reaction: null, change, time: at, counts: [...counts] },
  });
  let time = 0;
  let nextChange = 0;
  let fired: number | null = null;
  const nextGridTime = (): number => (replicate.counts.length === 0 ? -1 : gridTimes[replicate.counts.length]!);
  nextState: for (;;) {
    const settled = settleTriggers(prepared, constants, counts);
    if (typeof settled !== 'number') return failAtChange(settled, time);
    if (settled > 0) fired = null;
    const state = stateValues(prepared, constants, counts);
    notePassages(prepared, state, passages, time);
    const total = selection.total(state, fired);
    if (typeof total !== 'number') return fail(total.kind, total.reaction, time);
    const waitingDraw = uniform52(generator.next());
    const choiceDraw = uniform52(generator.next());
    const newTime = total === 0 ? Infinity : time - logarithm(1 - waitingDraw) / total;
    while (newTime > Math.min(nextGridTime(), schedule[nextChange]?.time ?? Infinity)) {
      const moment = schedule[nextChange]?.time ?? Infinity;
      if (moment <= nextGridTime()) {
        time = moment;
        for (; schedule[nextChange]?.time === moment; nextChange++) {
          const fault = makeChange(prepared, constants, counts, schedule[nextChange]!.change);
          if (fault) return failAtChange(fault, time);
        }
        fired = null;
        continue nextState;
      }
      replicate.counts.push(prepared.countObservables.map((species) => counts[species]!));
      replicate.reals.push(prepared.realObservables.map((term) => evaluateTerm(term, state)));
      if (replicate.counts.length === gridTimes.length) return replicate;
    }
    if (replicate.firings >= task.eventLimit) return fail('event_limit', null, newTime);
    const chosen = selection.choose(choiceDraw, () => uniform52(generator.next()));
    const { changes } = prepared.reactions[chosen]!;
    if (changes.some(({ species, count }) => counts[species]! + count > largestCount))
      return fail('count_overflow', chosen, newTime);
    for (const { species, count } of changes) counts[species]! += count;
    time = newTime;
    fired = chosen;
    replicate.firings++;
  }
}
