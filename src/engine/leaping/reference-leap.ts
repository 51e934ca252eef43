/** A leaped replicate in plain TypeScript: the oracle of the generated kernel. Its steps are numbered as in tau-leaping.ts. */
import { makeChange, stateValues, type ChangeFault } from '../exact/changes.ts';
import {
  notePassages,
  prefixSums,
  type Cause,
  type ReferenceReplicate,
  type ReferenceTask,
} from '../exact/reference-direct.ts';
import { logarithm } from '../kernel/elementary/logarithm.ts';
import { evaluatePropensity, evaluateTerm } from '../kernel/evaluate.ts';
import { largestCount } from '../kernel/memory-layout.ts';
import { uniform52, Xoshiro256 } from '../random/xoshiro256.ts';
import { poisson } from './poisson.ts';
import { boundedSpecies } from './reaction-orders.ts';
import { selectStep } from './step-selection.ts';
import { exactStepsInARow, leastFiringsOfLeap } from './tau-leaping.ts';

export function runReferenceLeap(task: ReferenceTask, epsilon: number): ReferenceReplicate {
  const { prepared, constants, gridTimes, schedule } = task;
  const bounded = boundedSpecies(prepared);
  const generator = new Xoshiro256(task.generator);
  const uniform = (): number => uniform52(generator.next());
  let counts = Array.from(task.initialState);
  const passages = prepared.passages.map(() => Infinity);
  const replicate: ReferenceReplicate = { firings: 0, counts: [], reals: [], passages, cause: null };
  const fail = (kind: Cause['kind'], reaction: number | null, at: number): ReferenceReplicate => ({
    ...replicate,
    cause: { kind, reaction, change: null, time: at, counts: [...counts] },
  });
  let time = 0;
  let nextChange = 0;
  let exactSteps = 0;
  /** Where the leap just made began, for its rejection. */
  let before: { time: number; counts: number[]; length: number } | null = null;
  /** Half of the leap last rejected; infinite otherwise. */
  let longest = Infinity;

  const nextGridTime = (): number => (replicate.counts.length === 0 ? -1 : gridTimes[replicate.counts.length]!);
  const nextChangeTime = (): number => schedule[nextChange]?.time ?? Infinity;
  const record = (): void => {
    const state = stateValues(prepared, constants, counts);
    replicate.counts.push(prepared.countObservables.map((species) => counts[species]!));
    replicate.reals.push(prepared.realObservables.map((term) => evaluateTerm(term, state)));
  };
  const makeTimedChanges = (): ChangeFault | null => {
    time = nextChangeTime();
    for (; nextChangeTime() === time; nextChange++) {
      const fault = makeChange(prepared, constants, counts, schedule[nextChange]!.change);
      if (fault) return fault;
    }
    return null;
  };

  nextState: for (;;) {
    // 1. Propensities; the leap that spoiled them is rejected.
    const state = stateValues(prepared, constants, counts);
    const prefixes = prefixSums(prepared, state);
    if (!Array.isArray(prefixes)) {
      if (!before) return fail(prefixes.kind, prefixes.reaction, time);
      ({ time, counts } = before);
      longest = before.length / 2;
      before = null;
      continue;
    }
    if (before) longest = Infinity;
    before = null;
    const total = prefixes.at(-1) ?? 0;
    // 2.
    notePassages(prepared, state, passages, time);

    if (exactSteps > 0) {
      const waitingDraw = uniform();
      const choiceDraw = uniform();
      const newTime = total === 0 ? Infinity : time - logarithm(1 - waitingDraw) / total;
      while (newTime > Math.min(nextGridTime(), nextChangeTime())) {
        if (nextChangeTime() <= nextGridTime()) {
          const fault = makeTimedChanges();
          if (fault) return { ...replicate, cause: causeOf(fault, time, counts) };
          continue nextState;
        }
        record();
        if (replicate.counts.length === gridTimes.length) return replicate;
      }
      if (replicate.firings >= task.eventLimit) return fail('event_limit', null, newTime);
      const chosen = prefixes.findIndex((prefix) => prefix > choiceDraw * total);
      const { changes } = prepared.reactions[chosen]!;
      if (changes.some(({ species, count }) => counts[species]! + count > largestCount))
        return fail('count_overflow', chosen, newTime);
      for (const { species, count } of changes) counts[species]! += count;
      time = newTime;
      replicate.firings++;
      exactSteps--;
      continue;
    }

    // 3. What is due now.
    while (Math.min(nextGridTime(), nextChangeTime()) <= time) {
      if (nextChangeTime() <= nextGridTime()) {
        const fault = makeTimedChanges();
        if (fault) return { ...replicate, cause: causeOf(fault, time, counts) };
        longest = Infinity;
        continue nextState;
      }
      record();
      if (replicate.counts.length === gridTimes.length) return replicate;
    }

    for (;;) {
      // 4. Length of the leap.
      const propensities = prepared.reactions.map((reaction) => evaluatePropensity(reaction, state));
      const step = selectStep(prepared, bounded, counts, propensities, epsilon);
      const length = Math.min(step.length, longest);
      const stop = Math.min(nextGridTime(), nextChangeTime());
      const toStop = stop - time;
      if (!(step.leapingTotal > 0 && Math.min(length, toStop) >= leastFiringsOfLeap / total)) {
        exactSteps = exactStepsInARow;
        longest = Infinity;
        continue nextState;
      }
      // 5. Draws.
      const waiting = step.criticalTotal > 0 ? -logarithm(1 - uniform()) / step.criticalTotal : Infinity;
      const leap = Math.min(toStop, length, waiting);
      const numbers = prepared.reactions.map(() => 0);
      let events = 0;
      if (waiting < Math.min(toStop, length)) {
        numbers[firstAbove(step.critical, uniform() * step.criticalTotal)] = 1;
        events++;
      }
      for (const [j, propensity] of step.leaping.entries()) {
        const mean = propensity * leap;
        if (!(mean > 0)) continue;
        numbers[j] = poisson(mean, uniform);
        events++;
      }
      // 6. Events.
      const newTime = leap === toStop ? stop : time + leap;
      replicate.firings += events;
      if (replicate.firings > task.eventLimit) return fail('event_limit', null, newTime);
      // 7. All changes at once.
      const next = [...counts];
      for (const [j, { changes }] of prepared.reactions.entries())
        for (const { species, count } of changes) next[species]! += count * numbers[j]!;
      if (prepared.changing.every((species) => next[species]! >= 0 && next[species]! <= largestCount)) {
        before = { time, counts, length };
        // 8.
        counts = next;
        time = newTime;
        continue nextState;
      }
      longest = length / 2;
    }
  }
}

/** The first whose prefix sum is above `threshold`. */
function firstAbove(values: readonly number[], threshold: number): number {
  let prefix = 0;
  return values.findIndex((value) => (prefix += value) > threshold);
}

const causeOf = ({ kind, change }: ChangeFault, time: number, counts: number[]): Cause => ({
  kind,
  reaction: null,
  change,
  time,
  counts: [...counts],
});
