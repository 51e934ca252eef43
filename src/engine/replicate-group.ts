/** What every method offers: run a group of consecutive replicates of one point and leave their results side by side. */
import type { ModelFailure } from './ensemble.ts';
import type { ChangeFault, ScheduledChange } from './exact/changes.ts';
import type { PreparedNetwork } from './kernel/prepared-network.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';

/** A point, ready to run: everything but the range of replicates. */
export interface PointTask {
  network: ResolvedNetwork;
  prepared: PreparedNetwork;
  constants: Float64Array;
  /** The state in which every replicate begins (exact/changes.ts). */
  initialState: Float64Array;
  schedule: ScheduledChange[];
  gridTimes: Float64Array;
  /** random/stream-key.ts */
  streamBase: bigint;
  /** Events allowed in one replicate. */
  eventLimit: number;
  /** Of tau-leaping; null for the exact methods. */
  epsilon: number | null;
  /** Replicates in a group at most. */
  slots: number;
}

/** The complete replicates of a group. The arrays are valid until the next group runs. */
export interface GroupOutcome {
  completed: number;
  counts: Int32Array;
  reals: Float64Array;
  stride: number;
  events: Float64Array;
  /** Times of first passage, [passage][slot]. */
  passages: Float64Array;
  /** Why the group ended early: the model failed in the replicate after the last complete one, or the allowance ran out there. */
  end: ModelFailure | 'allowance_spent' | null;
}

export interface GroupRunner {
  /**
   * Runs replicates first … first + count − 1, count ≤ slots. `allowance`: firings that the group may spend; the replicate
   * that would exceed it is left out together with all after it.
   */
  run(first: number, count: number, allowance: number): GroupOutcome;
}

/** Slots such that a group's results stay in the processor's cache; a power of two from 4 to 1024. */
export function groupSlots(prepared: PreparedNetwork, gridPoints: number, replicates: number): number {
  const bytesPerReplicate = gridPoints * (4 * prepared.countObservables.length + 8 * prepared.realObservables.length);
  const fitting = 2 ** Math.floor(Math.log2(2 ** 20 / Math.max(1, bytesPerReplicate)));
  const wanted = 2 ** Math.ceil(Math.log2(Math.max(1, replicates)));
  return Math.max(4, Math.min(1024, fitting, wanted));
}

/** A failure as the interface tells it, from indices. */
export function modelFailure(
  network: ResolvedNetwork,
  kind: ModelFailure['kind'],
  replicate: number,
  reaction: number | null,
  time: number,
  counts: ArrayLike<number>,
): ModelFailure {
  return {
    kind,
    replicate,
    reaction: reaction === null ? null : network.reactions[reaction]!.id,
    time,
    state: Object.fromEntries(network.species.map(({ id }, index) => [id, counts[index]!])),
  };
}

/** A failure that a change brought about. */
export const changeFailure = (
  network: ResolvedNetwork,
  { kind, change }: ChangeFault,
  replicate: number,
  time: number,
  counts: ArrayLike<number>,
): ModelFailure => ({
  ...modelFailure(network, kind, replicate, null, time, counts),
  change: network.changes![change]!.id,
});
