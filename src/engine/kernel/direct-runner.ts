/** Groups of replicates by the generated kernels of the direct method. */
import { stateValues } from '../exact/changes.ts';
import { prefixSums } from '../exact/reference-direct.ts';
import type { ModelFailure } from '../ensemble.ts';
import {
  changeFailure,
  modelFailure,
  type GroupOutcome,
  type GroupRunner,
  type PointTask,
} from '../replicate-group.ts';
import { compiledKernel, ensureBytes, type CompiledKernel } from './compile-kernel.ts';
import { directScalarModule } from './direct-scalar.ts';
import { directSimdModule } from './direct-simd.ts';
import { hasTriggers, timedChanges } from './emit-changes.ts';
import { changeTable, handedOver, laneCount, laneLayout, largestLaneChange, largestLaneCount } from './lane-layout.ts';
import { control, scheduleEntryBytes, status, structureLayout, taskLayout, type TaskLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';

/** The first calls are short, so that the runtime changes to optimised code early; later ones long. */
const firstChunk = 2 ** 11;
const largestChunk = 2 ** 20;

/** The code depends on this part of the task only. */
const structureKey = ({ prepared }: PointTask): string =>
  JSON.stringify({ ...prepared, constants: prepared.constants.length });

export async function directScalarRunner(task: PointTask): Promise<GroupRunner> {
  const kernel = await compiledKernel(`direct-scalar ${structureKey(task)}`, () => directScalarModule(task.prepared));
  return new DirectRunner(kernel, task);
}

export async function directSimdRunner(task: PointTask): Promise<GroupRunner> {
  if (!lanesSuit(task)) return directScalarRunner(task);
  const kernel = await compiledKernel(`direct-simd ${structureKey(task)}`, () => directSimdModule(task.prepared));
  return new DirectRunner(kernel, task);
}

/** Whether lanes can run the point at all; otherwise the scalar kernel does, with the same bytes. */
function lanesSuit({ prepared, constants, initialState }: PointTask): boolean {
  if (hasTriggers(prepared) || prepared.passages.length > 0) return false;
  const smallSteps = prepared.reactions.every(({ changes }) =>
    changes.every(({ count }) => Math.abs(count) <= largestLaneChange),
  );
  const smallCounts = prepared.changing.every((species) => initialState[species]! <= largestLaneCount);
  const positive = prepared.reactions.every(({ law }) => {
    if (law.kind === 'expression') return true;
    const { factor } = law;
    const value = factor.kind === 'number' ? factor.value : factor.kind === 'constant' ? constants[factor.slot]! : 0;
    return !(value < 0 || Object.is(value, -0));
  });
  return prepared.reactions.length > 0 && smallSteps && smallCounts && positive;
}

class DirectRunner implements GroupRunner {
  readonly #kernel: CompiledKernel;
  readonly #task: PointTask;
  readonly #layout: TaskLayout;
  #view: DataView;
  #chunk = firstChunk;

  constructor(kernel: CompiledKernel, task: PointTask) {
    this.#kernel = kernel;
    this.#task = task;
    const { prepared, gridTimes, schedule, slots } = task;
    const structureEnd = kernel.runLanes ? laneLayout(prepared).end : structureLayout(prepared).end;
    this.#layout = taskLayout({
      prepared,
      structureEnd,
      gridIntervals: gridTimes.length - 1,
      slots,
      scheduleEntries: schedule.length,
    });
    this.#view = new DataView(kernel.memory.buffer);
  }

  /** Points that share a kernel take turns between groups; the one whose turn it is writes its task again. */
  #takeMemory(): void {
    const { memory } = this.#kernel;
    if (this.#kernel.owner === this) return;
    ensureBytes(memory, this.#layout.end);
    this.#view = new DataView(memory.buffer);
    writeTask(memory, this.#task, this.#layout);
    if (this.#kernel.runLanes) writeChanges(memory, this.#task.prepared);
    this.#kernel.owner = this;
  }

  run(first: number, count: number, allowance: number): GroupOutcome {
    this.#takeMemory();
    this.#view.setBigInt64(control.firstReplicate, BigInt(first), true);
    let left = allowance;
    for (let done = 0; done < count;) {
      const part = this.#partOf(count, done, allowance, left);
      const lanesDone = this.#kernel.runLanes !== undefined && part >= laneCount;
      const limit = Math.min(this.#task.eventLimit, left);
      if (lanesDone) this.#finish(this.#kernel.runLanes!, done, done + part, limit);
      for (const end = done + part; done < end; done++) {
        if (!lanesDone || this.#eventsOf(done) === handedOver) {
          const answer = this.#finish(this.#kernel.run, done, done + 1, Math.min(this.#task.eventLimit, left));
          if (answer !== status.finished) return this.#stopped(first, done, answer, left);
        }
        if (this.#eventsOf(done) > left) return this.#outcome(done, 'allowance_spent');
        left -= this.#eventsOf(done);
      }
    }
    return this.#outcome(count, null);
  }

  /** How many slots to run next: few at a time where an allowance may end them, by what replicates have cost so far. */
  #partOf(count: number, done: number, allowance: number, left: number): number {
    if (allowance === Infinity) return count - done;
    const costSoFar = (allowance - left) / Math.max(1, done);
    const affordable = done === 0 ? laneCount : Math.floor(left / Math.max(1, costSoFar) / 2);
    return Math.min(count - done, Math.max(laneCount, affordable));
  }

  #eventsOf(slot: number): number {
    return this.#view.getFloat64(this.#layout.events + 8 * slot, true);
  }

  /** Runs the slots from `from` to before `end`; answers a `status`. */
  #finish(run: (firings: number) => number, from: number, end: number, eventLimit: number): number {
    this.#view.setInt32(control.slot, from, true);
    this.#view.setInt32(control.active, 0, true);
    this.#view.setInt32(control.slotCount, end, true);
    this.#view.setFloat64(control.eventLimit, eventLimit, true);
    for (;;) {
      const answer = run(this.#chunk);
      if (answer !== status.paused) return answer;
      this.#chunk = Math.min(largestChunk, this.#chunk * 2);
    }
  }

  #stopped(first: number, slot: number, answer: number, left: number): GroupOutcome {
    const spent = answer === status.eventLimit && left < this.#task.eventLimit;
    return this.#outcome(slot, spent ? 'allowance_spent' : this.#failure(answer, first + slot));
  }

  #outcome(completed: number, end: GroupOutcome['end']): GroupOutcome {
    const { prepared, gridTimes, slots } = this.#task;
    const { buffer } = this.#kernel.memory;
    const layout = this.#layout;
    return {
      completed,
      counts: new Int32Array(buffer, layout.counts, gridTimes.length * prepared.countObservables.length * slots),
      reals: new Float64Array(buffer, layout.reals, gridTimes.length * prepared.realObservables.length * slots),
      stride: slots,
      events: new Float64Array(buffer, layout.events, slots),
      passages: new Float64Array(buffer, layout.passages, prepared.passages.length * slots),
      end,
    };
  }

  #failure(answer: number, replicate: number): ModelFailure {
    const { prepared, constants, network } = this.#task;
    const saved = new Float64Array(
      this.#kernel.memory.buffer,
      structureLayout(prepared).savedState,
      prepared.stateSize,
    );
    const counts = Array.from(saved);
    const time = this.#view.getFloat64(control.failureTime, true);
    if (answer === status.eventLimit) return modelFailure(network, 'event_budget', replicate, null, time, counts);
    if (answer === status.countOverflow) {
      const reaction = this.#view.getInt32(control.failedIndex, true);
      return modelFailure(network, 'count_overflow', replicate, reaction, time, counts);
    }
    if (answer === status.badAssignment || answer === status.changeCascade) {
      const change = this.#view.getInt32(control.failedIndex, true);
      const kind = answer === status.badAssignment ? 'bad_assignment' : 'change_cascade';
      return changeFailure(network, { kind, change }, replicate, time, counts);
    }
    const cause = prefixSums(prepared, stateValues(prepared, constants, counts));
    if (Array.isArray(cause)) throw new Error('the kernel refused propensities that the reference accepts');
    return modelFailure(network, cause.kind, replicate, cause.reaction, time, counts);
  }
}

/** Writes everything that stays the same for all groups of a task. */
function writeTask(memory: WebAssembly.Memory, task: PointTask, layout: TaskLayout): void {
  const { prepared, constants, gridTimes, initialState, slots } = task;
  const structure = structureLayout(prepared);
  const { buffer } = memory;
  const view = new DataView(buffer);
  new Float64Array(buffer, structure.constants, constants.length).set(constants);
  new Float64Array(buffer, structure.initialState, initialState.length).set(initialState);
  new Float64Array(buffer, layout.gridTimes, gridTimes.length).set(gridTimes);
  // Grid time 0 is always written before the first firing, even one at time 0.
  view.setFloat64(layout.gridTimes, -1, true);
  view.setBigUint64(control.streamBase, task.streamBase, true);
  const words: [number, number][] = [
    [control.gridIntervals, gridTimes.length - 1],
    [control.gridTimes, layout.gridTimes],
    [control.events, layout.events],
    [control.counts, layout.counts],
    [control.reals, layout.reals],
    [control.cellBytes, 4 * slots],
    [control.schedule, layout.schedule],
    [control.passages, layout.passages],
  ];
  for (const [at, value] of words) view.setInt32(at, value, true);
  writeSchedule(view, task, layout.schedule);
}

/** The timed changes in the order in which they happen, ended by one that never does. */
function writeSchedule(view: DataView, { prepared, schedule }: PointTask, at: number): void {
  const timed = timedChanges(prepared);
  [...schedule, { time: Infinity, change: timed[0] ?? 0 }].forEach(({ time, change }, entry) => {
    view.setFloat64(at + scheduleEntryBytes * entry, time, true);
    view.setInt32(at + scheduleEntryBytes * entry + 8, timed.indexOf(change), true);
  });
}

function writeChanges(memory: WebAssembly.Memory, prepared: PreparedNetwork): void {
  const table = changeTable(prepared);
  new Float64Array(memory.buffer, laneLayout(prepared).changes, table.length).set(table);
}
