/** Groups of replicates by the reference: slow and plain, for tests and for `verify`. */
import {
  changeFailure,
  modelFailure,
  type GroupOutcome,
  type GroupRunner,
  type PointTask,
} from '../replicate-group.ts';
import type { ModelFailure } from '../ensemble.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { replicateState } from '../random/stream-key.ts';
import { runReferenceReplicate, type Cause, type ReferenceReplicate, type ReferenceTask } from './reference-direct.ts';

/** `runReplicate`: the method. */
export function referenceRunner(
  task: PointTask,
  runReplicate: (replicate: ReferenceTask) => ReferenceReplicate = (replicate) => runReferenceReplicate(replicate),
): GroupRunner {
  const { prepared, network, gridTimes, slots } = task;
  const outcome: GroupOutcome = {
    completed: 0,
    counts: new Int32Array(gridTimes.length * prepared.countObservables.length * slots),
    reals: new Float64Array(gridTimes.length * prepared.realObservables.length * slots),
    stride: slots,
    events: new Float64Array(slots),
    passages: new Float64Array(prepared.passages.length * slots),
    end: null,
  };
  return {
    run(first, count, allowance) {
      let left = allowance;
      for (let slot = 0; slot < count; slot++) {
        const replicate = first + slot;
        const eventLimit = Math.min(task.eventLimit, left);
        const generator = replicateState(task.streamBase, replicate);
        const { cause, firings, counts, reals, passages } = runReplicate({ ...task, generator, eventLimit });
        if (cause) {
          const spent = cause.kind === 'event_limit' && left < task.eventLimit;
          return { ...outcome, completed: slot, end: spent ? 'allowance_spent' : failureOf(network, cause, replicate) };
        }
        outcome.events[slot] = firings;
        counts.flat().forEach((value, cell) => (outcome.counts[cell * slots + slot] = value));
        reals.flat().forEach((value, cell) => (outcome.reals[cell * slots + slot] = value));
        passages.forEach((time, passage) => (outcome.passages[passage * slots + slot] = time));
        left -= firings;
      }
      return { ...outcome, completed: count };
    },
  };
}

function failureOf(network: ResolvedNetwork, cause: Cause, replicate: number): ModelFailure {
  const { kind, reaction, change, time, counts } = cause;
  if (kind === 'bad_assignment' || kind === 'change_cascade')
    return changeFailure(network, { kind, change: change! }, replicate, time, counts);
  return modelFailure(network, kind === 'event_limit' ? 'event_budget' : kind, replicate, reaction, time, counts);
}
