/**
 * Generates the scalar kernel of the direct method: one WebAssembly module per network structure, one replicate at a time.
 * What it computes, operation by operation, is written in exact/direct-method.ts.
 */
import { emitLogarithmOfNormal } from './elementary/logarithm.ts';
import {
  emitAssignments,
  emitChangeTime,
  emitScheduledChanges,
  emitSettleTriggers,
  timedChanges,
  type ChangeContext,
} from './emit-changes.ts';
import { emitNoPassages, emitPassages } from './emit-passages.ts';
import { ExpressionEmitter } from './emit-expression.ts';
import { emitGridTime, emitRecording, emitReplicateKey, emitStoreFirings } from './emit-recording.ts';
import { emitNext, emitSeeding, generatorLocals, onePlusUniform } from './emit-random.ts';
import { scalarLanes as lanes } from './lanes.ts';
import { control, largestCount, largestTotal, status, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import { ModuleBuilder, type FunctionBuilder } from './wasm/module-builder.ts';
import {
  block,
  branch,
  branchIf,
  branchTable,
  f64,
  get,
  giveBack,
  i32,
  label,
  loop,
  memory,
  op,
  select,
  sequence,
  set,
  when,
  type Local,
  type Node,
} from './wasm/node.ts';

/** Above this size the state stays in memory, so that functions keep a moderate number of locals. */
const largestStateInLocals = 200;

const address = i32(0);

/** The state, in locals or in memory. */
class State {
  readonly #locals: Local<'f64'>[] | null;

  constructor(
    fn: FunctionBuilder,
    readonly size: number,
    readonly saved: number,
    readonly initial: number,
  ) {
    this.#locals =
      size <= largestStateInLocals ? Array.from({ length: size }, (_, index) => fn.local('f64', `x${index}`)) : null;
  }

  get(species: number): Node<'f64'> {
    return this.#locals ? get(this.#locals[species]!) : memory('f64.load', this.saved + 8 * species, address);
  }

  set(species: number, value: Node<'f64'>): Node {
    return this.#locals
      ? set(this.#locals[species]!, value)
      : memory('f64.store', this.saved + 8 * species, address, value);
  }

  all(change: (species: number) => Node): Node[] {
    return Array.from({ length: this.size }, (_, species) => change(species));
  }

  reset(): Node[] {
    return this.all((species) => this.set(species, memory('f64.load', this.initial + 8 * species, address)));
  }

  load(): Node[] {
    if (!this.#locals) return [];
    return this.all((species) => this.set(species, memory('f64.load', this.saved + 8 * species, address)));
  }

  save(): Node[] {
    if (!this.#locals) return [];
    return this.all((species) => memory('f64.store', this.saved + 8 * species, address, this.get(species)));
  }
}

/**
 * `run(events: i32): i32` goes on for at most so many firings and answers a `status`. Called in chunks, so that the
 * runtime can change to optimised code between calls and the host can look at its budgets.
 */
export function directScalarModule(prepared: PreparedNetwork, module = new ModuleBuilder()): ModuleBuilder {
  const layout = structureLayout(prepared);
  const fn = module.function('run', [['chunk', 'i32']], 'i32', { exported: true });
  const chunk = fn.parameter(0, 'i32');
  const time = fn.local('f64', 'time');
  const newTime = fn.local('f64', 'newTime');
  const nextGridTime = fn.local('f64', 'nextGridTime');
  const nextChangeTime = fn.local('f64', 'nextChangeTime');
  const changeIndex = fn.local('i32', 'changeIndex');
  const passed = fn.local('i32', 'passed');
  const gridIndex = fn.local('i32', 'gridIndex');
  const firings = fn.local('f64', 'firings');
  const eventLimit = fn.local('f64', 'eventLimit');
  const slot = fn.local('i32', 'slot');
  const total = fn.local('f64', 'total');
  const threshold = fn.local('f64', 'threshold');
  const drawn = fn.local('f64', 'drawn');
  const chosen = fn.local('i32', 'chosen');
  const generator = generatorLocals(lanes, fn);
  const state = new State(fn, prepared.stateSize, layout.savedState, layout.initialState);
  const assigned = prepared.assigned.map((_, index) => fn.local('f64', `assigned${index}`));
  const expressions = new ExpressionEmitter(lanes, module, fn, {
    species: (index) => state.get(index),
    constant: (slotIndex) => memory('f64.load', layout.constants + 8 * slotIndex, address),
    assigned: (index) => get(assigned[index]!),
  });
  const field = (at: number): Node<'i32'> => memory('i32.load', at, address);
  const save = (): Node[] => [
    memory('f64.store', control.time, address, get(time)),
    memory('i32.store', control.gridIndex, address, get(gridIndex)),
    memory('i32.store', control.changeIndex, address, get(changeIndex)),
    memory('i32.store', control.passed, address, get(passed)),
    memory('f64.store', control.firings, address, get(firings)),
    memory('i32.store', control.slot, address, get(slot)),
    ...generator.state.map((word, i) => memory('i64.store', control.generator + 8 * i, address, get(word))),
    ...state.save(),
  ];
  const stop = (answer: number, at: Local<'f64'> = time): Node[] => [
    memory('f64.store', control.failureTime, address, get(at)),
    ...save(),
    giveBack(i32(answer)),
  ];

  const changing: ChangeContext = {
    prepared,
    fn,
    expressions,
    assign: () => emitAssignments(prepared, expressions, assigned),
    state,
    fail: (answer, change) => [memory('i32.store', control.failedIndex, address, i32(change)), ...stop(answer)],
  };
  const timed = timedChanges(prepared).length > 0;
  /** Where the course of firings is interrupted next. */
  const nextStopTime = timed ? op('f64.min', get(nextGridTime), get(nextChangeTime)) : get(nextGridTime);

  const nextReplicate = label('nextReplicate');
  const nextEvent = label('nextEvent');
  const nextGridPoint = label('nextGridPoint');
  const begin: Node[] = [
    when(op('i32.eq', get(slot), field(control.slotCount)), [...save(), giveBack(i32(status.finished))]),
    ...emitSeeding(module, fn, generator.state, emitReplicateKey(slot)),
    ...state.reset(),
    set(time, f64(0)),
    set(firings, f64(0)),
    set(gridIndex, i32(0)),
    set(changeIndex, i32(0)),
    ...emitNoPassages(changing, slot, passed),
    memory('i32.store', control.active, address, i32(1)),
  ];

  const logarithm = emitLogarithmOfNormal(
    lanes,
    fn,
    op('f64.sub', f64(2), onePlusUniform(lanes, get(generator.output))),
  );
  const advance: Node[] = [
    ...emitNext(lanes, generator),
    ...logarithm.statements,
    set(newTime, op('f64.sub', get(time), op('f64.div', logarithm.value, get(total)))),
    set(newTime, select(f64(Infinity), get(newTime), op('f64.eq', get(total), f64(0)))),
    ...emitNext(lanes, generator),
    set(drawn, op('f64.sub', onePlusUniform(lanes, get(generator.output)), f64(1))),
  ];

  const { statements: propensities, prefixes } = emitPropensities(prepared, fn, expressions, total, assigned, stop);
  fn.emit(
    set(slot, field(control.slot)),
    set(eventLimit, memory('f64.load', control.eventLimit, address)),
    ...state.load(),
    set(time, memory('f64.load', control.time, address)),
    set(gridIndex, field(control.gridIndex)),
    set(changeIndex, field(control.changeIndex)),
    set(passed, field(control.passed)),
    set(firings, memory('f64.load', control.firings, address)),
    ...generator.state.map((word, i) => set(word, memory('i64.load', control.generator + 8 * i, address))),
    loop(
      nextReplicate,
      when(op('i32.eqz', field(control.active)), begin),
      set(nextGridTime, emitGridTime(gridIndex)),
      ...(timed ? [set(nextChangeTime, emitChangeTime(changeIndex))] : []),
      loop(
        nextEvent,
        ...emitSettleTriggers(changing),
        ...emitPassages(changing, slot, time, passed),
        sequence('propensities', propensities),
        ...advance,
        when(op('i32.eqz', op('f64.le', get(newTime), nextStopTime)), [
          loop(
            nextGridPoint,
            ...(timed
              ? [
                  when(op('f64.le', get(nextChangeTime), get(nextGridTime)), [
                    set(time, get(nextChangeTime)),
                    ...emitScheduledChanges(changing, changeIndex, nextChangeTime),
                    branch(nextEvent),
                  ]),
                ]
              : []),
            ...emitRecording(prepared, fn, expressions, (index) => state.get(index), gridIndex, slot),
            set(gridIndex, op('i32.add', get(gridIndex), i32(1))),
            when(op('i32.gt_s', get(gridIndex), field(control.gridIntervals)), [
              emitStoreFirings(slot, get(firings)),
              set(slot, op('i32.add', get(slot), i32(1))),
              memory('i32.store', control.active, address, i32(0)),
              branch(nextReplicate),
            ]),
            set(nextGridTime, emitGridTime(gridIndex)),
            branchIf(nextGridPoint, op('f64.gt', get(newTime), nextStopTime)),
          ),
        ]),
        when(op('f64.ge', get(firings), get(eventLimit)), stop(status.eventLimit, newTime)),
        set(threshold, op('f64.mul', get(drawn), get(total))),
        set(
          chosen,
          prefixes
            .slice(0, -1)
            .map((prefix) => op('f64.le', get(prefix), get(threshold)))
            .reduce<Node<'i32'>>((sum, one) => op('i32.add', sum, one), i32(0)),
        ),
        emitFiring(prepared, state, chosen, (reaction) => [
          memory('i32.store', control.failedIndex, address, i32(reaction)),
          ...stop(status.countOverflow, newTime),
        ]),
        set(time, get(newTime)),
        set(firings, op('f64.add', get(firings), f64(1))),
        set(chunk, op('i32.sub', get(chunk), i32(1))),
        branchIf(nextEvent, get(chunk)),
        ...save(),
        giveBack(i32(status.paused)),
      ),
    ),
    giveBack(i32(status.finished)),
  );
  return module;
}

/** Propensities, their prefix sums in the order of the reactions, and the check of both. */
function emitPropensities(
  prepared: PreparedNetwork,
  fn: FunctionBuilder,
  expressions: ExpressionEmitter<'scalar'>,
  total: Local<'f64'>,
  assigned: Local<'f64'>[],
  stop: (answer: number) => Node[],
): { statements: Node[]; prefixes: Local<'f64'>[] } {
  const statements: Node[] = [];
  const prefixes: Local<'f64'>[] = [];
  const propensity = fn.local('f64', 'propensity');
  const bad = fn.local('i32', 'bad');
  statements.push(set(bad, i32(0)));
  statements.push(...emitAssignments(prepared, expressions, assigned));
  prepared.reactions.forEach((reaction, index) => {
    const prefix = fn.local('f64', `prefix${index}`);
    const previous = prefixes.at(-1);
    statements.push(
      ...expressions.assignPropensity(propensity, reaction),
      set(bad, op('i32.or', get(bad), op('f64.lt', get(propensity), f64(0)))),
      set(prefix, previous ? op('f64.add', get(previous), get(propensity)) : get(propensity)),
    );
    prefixes.push(prefix);
  });
  const last = prefixes.at(-1);
  statements.push(
    set(total, last ? get(last) : f64(0)),
    when(
      op('i32.or', get(bad), op('i32.eqz', op('f64.le', get(total), f64(largestTotal)))),
      stop(status.badPropensity),
    ),
  );
  return { statements, prefixes };
}

/** Applies the chosen reaction's changes; a count above the largest leaves through `overflow` with the state as before. */
export function emitFiring(
  prepared: PreparedNetwork,
  state: ChangeContext['state'],
  chosen: Local<'i32'>,
  overflow: (reaction: number) => Node[],
): Node {
  const fired = label('fired');
  const cases = prepared.reactions.map((_, index) => label(`reaction${index}`));
  if (cases.length === 0) return block(fired);
  let inner: Node[] = [branchTable(cases.slice(0, -1), cases.at(-1)!, get(chosen))];
  prepared.reactions.forEach(({ changes }, index) => {
    const tooLarge = changes
      .filter(({ count }) => count > 0)
      .map(({ species, count }) => op('f64.gt', op('f64.add', state.get(species), f64(count)), f64(largestCount)));
    inner = [
      block(cases[index]!, ...inner),
      ...(tooLarge.length > 0
        ? [
            when(
              tooLarge.reduce((any, one) => op('i32.or', any, one)),
              overflow(index),
            ),
          ]
        : []),
      ...changes.map(({ species, count }) => state.set(species, op('f64.add', state.get(species), f64(count)))),
      branch(fired),
    ];
  });
  return block(fired, ...inner);
}
