/** Groups of replicates by the reference: slow and plain, for tests and for `verify`. */
import { modelFailure, type GroupOutcome, type GroupRunner, type PointTask } from '../replicate-group.ts';
import { replicateState } from '../random/stream-key.ts';
import { runReferenceReplicate } from './reference-direct.ts';

export function referenceRunner(task: PointTask): GroupRunner {
  const { prepared, network, gridTimes, slots } = task;
  const initialCounts = network.species.map(({ initialCount }) => initialCount);
  const outcome: GroupOutcome = {
    completed: 0,
    counts: new Int32Array(gridTimes.length * prepared.countObservables.length * slots),
    reals: new Float64Array(gridTimes.length * prepared.realObservables.length * slots),
    stride: slots,
    events: new Float64Array(slots),
    end: null,
  };
  return {
    run(first, count, allowance) {
      let left = allowance;
      for (let slot = 0; slot < count; slot++) {
        const replicate = first + slot;
        const eventLimit = Math.min(task.eventLimit, left);
        const generator = replicateState(task.streamBase, replicate);
        const { cause, firings, counts, reals } = runReferenceReplicate({
          ...task,
          initialCounts,
          generator,
          eventLimit,
        });
        if (cause) {
          const spent = cause.kind === 'event_limit' && left < task.eventLimit;
          const kind = cause.kind === 'event_limit' ? 'event_budget' : cause.kind;
          const failure = modelFailure(network, kind, replicate, cause.reaction, cause.time, cause.counts);
          return { ...outcome, completed: slot, end: spent ? 'allowance_spent' : failure };
        }
        outcome.events[slot] = firings;
        counts.flat().forEach((value, cell) => (outcome.counts[cell * slots + slot] = value));
        reals.flat().forEach((value, cell) => (outcome.reals[cell * slots + slot] = value));
        left -= firings;
      }
      return { ...outcome, completed: count };
    },
  };
}
