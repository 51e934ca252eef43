/** Groups of replicates by a generated kernel: memory, calls in chunks, allowances, failures. */
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
import { ensureBytes, type CompiledKernel } from './compile-kernel.ts';
import { timedChanges } from './emit-changes.ts';
import { handedOver, laneCount } from './lane-layout.ts';
import { control, scheduleEntryBytes, status, structureLayout, taskLayout, type TaskLayout } from './memory-layout.ts';

/** The first calls are short, so that the runtime changes to optimised code early; later ones long. */
const firstChunk = 2 ** 11;
const largestChunk = 2 ** 20;

/** The code depends on this part of the task only. */
export const structureKey = ({ prepared }: PointTask): string =>
  JSON.stringify({ ...prepared, constants: prepared.constants.length });

/** What a kernel has in memory between the structure's part and the task's. */
export interface KernelTables {
  end: number;
  write(memory: WebAssembly.Memory, task: PointTask): void;
}

export const noTables = ({ prepared }: PointTask): KernelTables => ({
  end: structureLayout(prepared).end,
  write: () => undefined,
});

export class KernelRunner implements GroupRunner {
  readonly #kernel: CompiledKernel;
  readonly #task: PointTask;
  readonly #layout: TaskLayout;
  readonly #tables: KernelTables;
  #view: DataView;
  #chunk = firstChunk;

  constructor(kernel: CompiledKernel, task: PointTask, tables: KernelTables) {
    this.#kernel = kernel;
    this.#task = task;
    this.#tables = tables;
    const { prepared, gridTimes, schedule, slots } = task;
    this.#layout = taskLayout({
      prepared,
      structureEnd: tables.end,
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
    this.#tables.write(memory, this.#task);
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
    // Composition-rejection adds up in another order: a total a hair above the largest may be below it here.
    const { kind, reaction } = Array.isArray(cause) ? { kind: 'not_a_number' as const, reaction: null } : cause;
    return modelFailure(network, kind, replicate, reaction, time, counts);
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
  view.setFloat64(control.epsilon, task.epsilon ?? 0, true);
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
