/** Runs one batch: a contiguous range of replicates of one point, by the kernel that the network's structure asks for. */
import { limits } from '@/domain/limits.ts';
import { chooseKernel } from './choose-kernel.ts';
import type { BatchResult, BatchTask, KernelName, ModelFailure, Trace } from './ensemble.ts';
import { initialState, scheduleOf } from './exact/changes.ts';
import { gridTimes, largestHorizon } from './exact/direct-method.ts';
import { runReferenceReplicate } from './exact/reference-direct.ts';
import { groupSelection } from './exact/reference-groups.ts';
import { referenceRunner } from './exact/reference-runner.ts';
import { compositionRejectionRunner } from './kernel/composition-runner.ts';
import { directScalarRunner, directSimdRunner } from './kernel/direct-runner.ts';
import { tauLeapingRunner } from './kernel/leap-runner.ts';
import { constantValues, prepareNetwork } from './kernel/prepare-network.ts';
import type { PreparedNetwork } from './kernel/prepared-network.ts';
import { hasTriggers } from './kernel/emit-changes.ts';
import { largestLeapingNetwork } from './leaping/tau-leaping.ts';
import { runReferenceLeap } from './leaping/reference-leap.ts';
import { streamBase } from './random/stream-key.ts';
import {
  changeFailure,
  groupSlots,
  modelFailure,
  type GroupOutcome,
  type GroupRunner,
  type PointTask,
} from './replicate-group.ts';
import { BlockCollector } from './statistics/block-collector.ts';
import { largestReal } from './statistics/real-cells.ts';
import { Summary } from './statistics/summary.ts';

/**
 * The answer depends on the task alone. Throws RangeError when the task itself is impossible (a horizon of 0, a bad seed):
 * callers check their input first. A failure of the model is part of the answer.
 */
export async function runBatch(task: BatchTask): Promise<BatchResult> {
  checkTask(task);
  const prepared = prepareNetwork(task.network, task.passages);
  checkLeaping(task, prepared);
  const kernel = task.kernel ?? (task.epsilon === undefined ? chooseKernel(prepared) : 'tau-leaping');
  const constants = constantValues(prepared, task.network);
  const initial = initialState(prepared, task.network, constants);
  const point: PointTask = {
    network: task.network,
    prepared,
    constants,
    initialState: initial.state,
    schedule: scheduleOf(task.network),
    gridTimes: gridTimes(task.horizon, task.gridIntervals),
    streamBase: streamBase(task.seed, task.purpose, task.point),
    eventLimit: task.eventBudgetPerReplicate ?? limits.eventsPerReplicate,
    epsilon: task.epsilon ?? null,
    slots: groupSlots(prepared, task.gridIntervals + 1, task.replicateCount),
  };
  const collector = new Collector(task, point);
  if (initial.fault) {
    const failure = changeFailure(task.network, initial.fault, task.firstReplicate, 0, initial.state);
    return { ...collector.result(), failure, kernel };
  }
  const runner = await runnerOf(kernel, point);
  let allowance = task.eventBudgetPerBatch ?? Infinity;
  while (collector.replicates < task.replicateCount && !collector.ended) {
    const first = task.firstReplicate + collector.replicates;
    const count = Math.min(point.slots, task.replicateCount - collector.replicates);
    allowance -= collector.add(runner.run(first, count, allowance));
  }
  return { ...collector.result(), kernel };
}

function runnerOf(kernel: KernelName, point: PointTask): GroupRunner | Promise<GroupRunner> {
  switch (kernel) {
    case 'reference':
      return referenceRunner(point);
    case 'direct-scalar':
      return directScalarRunner(point);
    case 'direct-simd':
      return directSimdRunner(point);
    case 'composition-rejection-reference':
      return referenceRunner(point, (replicate) =>
        runReferenceReplicate(replicate, groupSelection(replicate.prepared)),
      );
    case 'tau-leaping-reference':
      return referenceRunner(point, (replicate) => runReferenceLeap(replicate, point.epsilon!));
    case 'composition-rejection':
      return compositionRejectionRunner(point);
    case 'tau-leaping':
      return tauLeapingRunner(point);
  }
}

/** Joins groups of replicates into the answer of the batch. */
class Collector {
  replicates = 0;
  ended = false;
  readonly #task: BatchTask;
  readonly #point: PointTask;
  readonly #summary: Summary;
  readonly #blocks: BlockCollector | null;
  readonly #events: Float64Array;
  readonly #traces: Trace[] = [];
  /** By passage; as long as the batch was asked to be. */
  readonly #passages: Float64Array[];
  #failure: ModelFailure | null = null;

  constructor(task: BatchTask, point: PointTask) {
    this.#task = task;
    this.#point = point;
    this.#events = new Float64Array(task.replicateCount);
    this.#passages = point.prepared.passages.map(() => new Float64Array(task.replicateCount));
    const observables = task.network.observables.map(({ id }, i) => ({
      id,
      kind: point.prepared.observablePlaces[i]!.kind,
    }));
    const { pairs = [] } = task;
    const shape = { observables, gridPoints: task.gridIntervals + 1, ...(pairs.length > 0 ? { pairs } : {}) };
    this.#blocks = task.blocks ? new BlockCollector(shape, task.firstReplicate, point.prepared.passages.length) : null;
    this.#summary = this.#blocks?.summary ?? new Summary(shape);
  }

  /** Takes in a group; answers the firings of its complete replicates. */
  add(outcome: GroupOutcome): number {
    const first = this.#task.firstReplicate + this.replicates;
    const { completed, end } = this.#withoutBadReals(outcome, first);
    (this.#blocks ?? this.#summary).add({ ...outcome, replicates: completed });
    for (let slot = 0; slot < completed && first + slot < this.#task.keptTraces; slot++)
      this.#traces.push(this.#trace(outcome, slot, first + slot));
    this.#events.set(outcome.events.subarray(0, completed), this.replicates);
    for (const [passage, times] of this.#passages.entries()) {
      const from = passage * outcome.stride;
      times.set(outcome.passages.subarray(from, from + completed), this.replicates);
    }
    this.replicates += completed;
    this.ended = end !== null;
    if (end !== null && end !== 'allowance_spent') this.#failure = end;
    let firings = 0;
    for (let slot = 0; slot < completed; slot++) firings += outcome.events[slot]!;
    return firings;
  }

  /** A named observable that is not a number, or beyond what can be summed, fails its replicate. */
  #withoutBadReals(outcome: GroupOutcome, first: number): Pick<GroupOutcome, 'completed' | 'end'> {
    const { prepared, network, gridTimes } = this.#point;
    const perPoint = prepared.realObservables.length;
    let { completed, end } = outcome;
    for (let cell = 0; cell < perPoint * gridTimes.length; cell++) {
      for (let slot = 0; slot < completed; slot++) {
        if (Math.abs(outcome.reals[cell * outcome.stride + slot]!) < largestReal) continue;
        const gridPoint = Math.floor(cell / perPoint);
        const counts = prepared.countObservables.map((_, i) => {
          return outcome.counts[(gridPoint * prepared.countObservables.length + i) * outcome.stride + slot]!;
        });
        const bySpecies = network.species.map((_, species) => counts[prepared.countObservables.indexOf(species)]!);
        completed = slot;
        end = modelFailure(network, 'not_a_number', first + slot, null, gridTimes[gridPoint]!, bySpecies);
      }
    }
    return { completed, end };
  }

  #trace(outcome: GroupOutcome, slot: number, replicate: number): Trace {
    const { prepared, gridTimes } = this.#point;
    const points = gridTimes.length;
    const values = new Float64Array(prepared.observablePlaces.length * points);
    prepared.observablePlaces.forEach(({ kind, position }, observable) => {
      const source = kind === 'count' ? outcome.counts : outcome.reals;
      const perPoint = kind === 'count' ? prepared.countObservables.length : prepared.realObservables.length;
      for (let i = 0; i < points; i++)
        values[observable * points + i] = source[(i * perPoint + position) * outcome.stride + slot]!;
    });
    return { replicate, values };
  }

  #passageTimes(): Float64Array {
    const times = new Float64Array(this.#passages.length * this.replicates);
    for (const [passage, all] of this.#passages.entries())
      times.set(all.subarray(0, this.replicates), passage * this.replicates);
    return times;
  }

  result(): Omit<BatchResult, 'kernel'> {
    const blocks = this.#blocks?.share() ?? null;
    return {
      blocks,
      firstReplicate: this.#task.firstReplicate,
      replicateCount: this.replicates,
      eventsPerReplicate: this.#events.slice(0, this.replicates),
      summary: this.#summary,
      traces: this.#traces,
      passageTimes: this.#passageTimes(),
      failure: this.#failure,
    };
  }
}

/** Leaping kernels and ε go together. */
function checkLeaping({ kernel, epsilon }: BatchTask, prepared: PreparedNetwork): void {
  const leaps = kernel === undefined ? epsilon !== undefined : kernel.startsWith('tau-leaping');
  if (leaps !== (epsilon !== undefined)) throw new RangeError(`batch task: kernel ${kernel} with ε ${epsilon}`);
  if (epsilon === undefined) return;
  if (!(epsilon > 0 && epsilon <= 0.5)) throw new RangeError(`batch task: ε ${epsilon} is not in (0, 0.5]`);
  if (hasTriggers(prepared)) throw new RangeError('batch task: triggered changes do not leap');
  if (prepared.reactions.length > largestLeapingNetwork)
    throw new RangeError(`batch task: ${prepared.reactions.length} reactions do not leap`);
}

function checkTask(task: BatchTask): void {
  const demand = (holds: boolean, what: string): void => {
    if (!holds) throw new RangeError(`batch task: ${what}`);
  };
  const whole = (value: number, least: number): boolean => Number.isSafeInteger(value) && value >= least;
  demand(
    task.horizon > 0 && task.horizon <= largestHorizon,
    `horizon ${task.horizon} is not in (0, ${largestHorizon}]`,
  );
  demand(whole(task.gridIntervals, 1), `${task.gridIntervals} grid intervals`);
  demand(whole(task.firstReplicate, 0), `first replicate ${task.firstReplicate}`);
  demand(whole(task.replicateCount, 1), `${task.replicateCount} replicates`);
  demand(whole(task.keptTraces, 0), `${task.keptTraces} kept traces`);
  for (const budget of [task.eventBudgetPerReplicate, task.eventBudgetPerBatch])
    demand(budget === null || whole(budget, 0), `event budget ${budget}`);
  for (const { id, initialCount } of task.network.species)
    demand(whole(initialCount, 0) && initialCount < 2 ** 31, `initial count ${initialCount} of ${id}`);
  demand(task.network.observables.length > 0, 'no observables');
  const { passages = [] } = task;
  demand(passages.length <= limits.passagesPerJob, `${passages.length} passages`);
  for (const { observable, threshold } of passages)
    demand(
      observable in task.network.observables && Number.isFinite(threshold),
      `a passage of observable ${observable} at ${threshold}`,
    );
}
