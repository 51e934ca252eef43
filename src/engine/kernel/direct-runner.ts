/** Groups of replicates by the scalar kernel of the direct method. */
import { prefixSums, stateValues } from '../exact/reference-direct.ts';
import type { ModelFailure } from '../ensemble.ts';
import { modelFailure, type GroupOutcome, type GroupRunner, type PointTask } from '../replicate-group.ts';
import { compiledKernel, ensureBytes, type CompiledKernel } from './compile-kernel.ts';
import { directScalarModule } from './direct-scalar.ts';
import { control, status, structureLayout, taskLayout, type TaskLayout } from './memory-layout.ts';

/** The first calls are short, so that the runtime changes to optimised code early; later ones long. */
const firstChunk = 2 ** 12;
const largestChunk = 2 ** 20;

/** The code depends on this part of the task only. */
export const structureKey = ({ prepared }: PointTask): string =>
  JSON.stringify({ ...prepared, constants: prepared.constants.length });

export async function directScalarRunner(task: PointTask): Promise<GroupRunner> {
  const kernel = await compiledKernel(`direct-scalar ${structureKey(task)}`, () => directScalarModule(task.prepared));
  return new DirectRunner(kernel, task);
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
    const { prepared, gridTimes, slots } = task;
    const structure = structureLayout(prepared);
    this.#layout = taskLayout(prepared, structure.end, gridTimes.length - 1, slots);
    this.#view = new DataView(kernel.memory.buffer);
  }

  /** Points that share a kernel take turns between groups; the one whose turn it is writes its task again. */
  #takeMemory(): void {
    if (this.#kernel.owner === this) return;
    ensureBytes(this.#kernel.memory, this.#layout.end);
    this.#view = new DataView(this.#kernel.memory.buffer);
    writeTask(this.#kernel.memory, this.#task, this.#layout);
    this.#kernel.owner = this;
  }

  run(first: number, count: number, allowance: number): GroupOutcome {
    const { eventLimit } = this.#task;
    this.#takeMemory();
    this.#view.setBigInt64(control.firstReplicate, BigInt(first), true);
    this.#setWord(control.slot, 0);
    this.#setWord(control.active, 0);
    if (allowance >= count * eventLimit) return this.#outcome(first, this.#finish(count, eventLimit), eventLimit);
    let left = allowance;
    for (let slot = 0; slot < count; slot++) {
      const limit = Math.min(eventLimit, left);
      const answer = this.#finish(slot + 1, limit);
      if (answer !== status.finished) return this.#outcome(first, answer, limit);
      left -= this.#view.getFloat64(this.#layout.events + 8 * slot, true);
    }
    return this.#outcome(first, status.finished, eventLimit);
  }

  #setWord(at: number, value: number): void {
    this.#view.setInt32(at, value, true);
  }

  #finish(slotCount: number, eventLimit: number): number {
    this.#setWord(control.slotCount, slotCount);
    this.#view.setFloat64(control.eventLimit, eventLimit, true);
    for (;;) {
      const answer = this.#kernel.run(this.#chunk);
      if (answer !== status.paused) return answer;
      this.#chunk = Math.min(largestChunk, this.#chunk * 2);
    }
  }

  #outcome(first: number, answer: number, eventLimit: number): GroupOutcome {
    const { prepared, gridTimes, slots } = this.#task;
    const { buffer } = this.#kernel.memory;
    const layout = this.#layout;
    const completed = this.#view.getInt32(control.slot, true);
    const spent = answer === status.eventLimit && eventLimit < this.#task.eventLimit;
    return {
      completed,
      counts: new Int32Array(buffer, layout.counts, gridTimes.length * prepared.countObservables.length * slots),
      reals: new Float64Array(buffer, layout.reals, gridTimes.length * prepared.realObservables.length * slots),
      stride: slots,
      events: new Float64Array(buffer, layout.events, slots),
      end: answer === status.finished ? null : spent ? 'allowance_spent' : this.#failure(answer, first + completed),
    };
  }

  #failure(answer: number, replicate: number): ModelFailure {
    const { prepared, constants, network } = this.#task;
    const { savedCounts } = structureLayout(prepared);
    const counts =
      prepared.speciesCount === 0
        ? []
        : Array.from(new Float64Array(this.#kernel.memory.buffer, savedCounts, prepared.speciesCount));
    const time = this.#view.getFloat64(control.failureTime, true);
    if (answer === status.eventLimit) return modelFailure(network, 'event_budget', replicate, null, time, counts);
    if (answer === status.countOverflow) {
      const reaction = this.#view.getInt32(control.failedReaction, true);
      return modelFailure(network, 'count_overflow', replicate, reaction, time, counts);
    }
    const cause = prefixSums(prepared, stateValues(prepared, constants, counts));
    if (Array.isArray(cause)) throw new Error('the kernel refused propensities that the reference accepts');
    return modelFailure(network, cause.kind, replicate, cause.reaction, time, counts);
  }
}

/** Writes everything that stays the same for all groups of a task. */
export function writeTask(memory: WebAssembly.Memory, task: PointTask, layout: TaskLayout): void {
  const { prepared, network, constants, gridTimes, slots } = task;
  const structure = structureLayout(prepared);
  const { buffer } = memory;
  const view = new DataView(buffer);
  new Float64Array(buffer, structure.constants, constants.length).set(constants);
  network.species.forEach(({ initialCount }, i) =>
    view.setFloat64(structure.initialCounts + 8 * i, initialCount, true),
  );
  new Float64Array(buffer, layout.gridTimes, gridTimes.length).set(gridTimes);
  view.setBigUint64(control.streamBase, task.streamBase, true);
  const words: [number, number][] = [
    [control.gridIntervals, gridTimes.length - 1],
    [control.gridTimes, layout.gridTimes],
    [control.events, layout.events],
    [control.counts, layout.counts],
    [control.reals, layout.reals],
    [control.cellBytes, 4 * slots],
  ];
  for (const [at, value] of words) view.setInt32(at, value, true);
}
