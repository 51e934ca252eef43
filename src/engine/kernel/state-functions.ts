/**
 * Functions of a kernel that keeps the state in memory: assigned parameters, laws and observables by number, through the module's
 * table; recording, changes and first passages. Large networks thus stay many small functions instead of one of any size.
 */
import {
  emitScheduledChanges,
  emitSettleTriggers,
  emitChangeTime,
  hasTriggers,
  timedChanges,
  type ChangeContext,
} from './emit-changes.ts';
import { ExpressionEmitter } from './emit-expression.ts';
import { emitNoPassages, emitPassages } from './emit-passages.ts';
import { firing, type GroupLayout } from './group-layout.ts';
import { scalarLanes as lanes } from './lanes.ts';
import { control, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import { branch, call, callIndirect, get, giveBack, i32, label, loop, memory, op, set, when } from './wasm/node.ts';
import type { Callable, Local, Node } from './wasm/node.ts';

const zero = i32(0);
const field = (at: number): Node<'i32'> => memory('i32.load', at, zero);
const add = (a: Node<'i32'>, b: Node<'i32'>): Node<'i32'> => op('i32.add', a, b);

/** `body` for `at` from where it stands to before `end`, step by step. */
export function each(at: Local<'i32'>, end: Node<'i32'>, bytes: number, body: Node[]): Node {
  const next = label('next');
  return loop(next, when(op('i32.lt_u', get(at), end), [...body, set(at, add(get(at), i32(bytes))), branch(next)]));
}

export interface StateFunctions {
  /** assign(begin, end): works out the assigned parameters listed there. Absent without any. */
  assign: Callable<'none'> | null;
  /** beginPassages(slot), notePassages(slot, time). */
  beginPassages: Callable<'none'> | null;
  notePassages: Callable<'none'> | null;
  /** record(gridIndex, slot). */
  record: Callable<'none'>;
  /** Makes the timed changes of the next moment; answers a `status` of failure or 0. */
  makeTimedChanges: Callable<'i32'> | null;
  /** Lets triggered changes happen; answers a `status` of failure, `changesMade` or 0. */
  settle: Callable<'i32'> | null;
}

/** What `settle` answers when it made changes. */
export const changesMade = -1;

export function stateFunctions(prepared: PreparedNetwork, layout: GroupLayout, module: ModuleBuilder): StateFunctions {
  const { constants, savedState } = structureLayout(prepared);
  const stateAt = (place: number): Node<'f64'> => memory('f64.load', savedState + 8 * place, zero);
  const expressionsOf = (fn: FunctionBuilder): ExpressionEmitter<'scalar'> =>
    new ExpressionEmitter(lanes, module, fn, {
      species: stateAt,
      constant: (slot) => memory('f64.load', constants + 8 * slot, zero),
      assigned: (index) => memory('f64.load', layout.assigned + 8 * index, zero),
    });
  const numbered = (name: string, emit: (expressions: ExpressionEmitter<'scalar'>, value: Local<'f64'>) => Node[]) => {
    const fn = module.function(name, [], 'f64');
    const value = fn.local('f64', 'value');
    fn.emit(...emit(expressionsOf(fn), value), giveBack(get(value)));
    module.table.push(fn as unknown as FunctionBuilder);
  };
  prepared.assigned.forEach((term, i) => numbered(`assigned${i}`, (e, value) => e.assign(value, term)));
  for (const index of layout.lawFunctions)
    numbered(`law${index}`, (e, value) => e.assignPropensity(value, prepared.reactions[index]!));
  prepared.realObservables.forEach((term, i) => numbered(`observable${i}`, (e, value) => e.assign(value, term)));

  const assign = prepared.assigned.length > 0 ? assignFunction(layout, module) : null;
  const assignAll = (): Node[] => {
    const list = (at: number): Node<'i32'> => memory('i32.load', layout.everything + at, zero);
    return assign ? [call(assign, list(firing.assigned), list(firing.assignedEnd))] : [];
  };
  const context = (fn: FunctionBuilder): ChangeContext => ({
    prepared,
    fn,
    expressions: expressionsOf(fn),
    assign: assignAll,
    state: {
      get: stateAt,
      set: (place, value) => memory('f64.store', savedState + 8 * place, zero, value),
    },
    fail: (answer, change) => [memory('i32.store', control.failedIndex, zero, i32(change)), giveBack(i32(answer))],
  });
  return {
    assign,
    ...passageFunctions(prepared, module, (fn) => ({ ...context(fn), assign: () => [] })),
    record: recordFunction(prepared, layout, module),
    makeTimedChanges: timedChanges(prepared).length > 0 ? timedFunction(module, context) : null,
    settle: hasTriggers(prepared) ? settleFunction(module, context) : null,
  };
}

function assignFunction(layout: GroupLayout, module: ModuleBuilder): FunctionBuilder<'none'> {
  const fn = module.function(
    'assign',
    [
      ['at', 'i32'],
      ['end', 'i32'],
    ],
    'none',
  );
  const at = fn.parameter(0, 'i32');
  const number = memory('i32.load', 0, get(at));
  const place = op('i32.shl', number, i32(3));
  return fn.emit(
    each(at, get(fn.parameter(1, 'i32')), 4, [
      memory('f64.store', layout.assigned, place, callIndirect([], [], number)),
    ]),
  );
}

function passageFunctions(
  prepared: PreparedNetwork,
  module: ModuleBuilder,
  context: (fn: FunctionBuilder) => ChangeContext,
): Pick<StateFunctions, 'beginPassages' | 'notePassages'> {
  if (prepared.passages.length === 0) return { beginPassages: null, notePassages: null };
  const begin = module.function('beginPassages', [['slot', 'i32']], 'none');
  const none = begin.local('i32', 'passed');
  begin.emit(
    ...emitNoPassages(context(begin), begin.parameter(0, 'i32'), none),
    memory('i32.store', control.passed, zero, get(none)),
  );
  const note = module.function(
    'notePassages',
    [
      ['slot', 'i32'],
      ['time', 'f64'],
    ],
    'none',
  );
  const passed = note.local('i32', 'passed');
  note.emit(
    set(passed, field(control.passed)),
    ...emitPassages(context(note), note.parameter(0, 'i32'), note.parameter(1, 'f64'), passed),
    memory('i32.store', control.passed, zero, get(passed)),
  );
  return { beginPassages: begin, notePassages: note };
}

/** The same cells in the same order as emit-recording.ts. */
function recordFunction(
  prepared: PreparedNetwork,
  layout: GroupLayout,
  module: ModuleBuilder,
): FunctionBuilder<'none'> {
  const fn = module.function(
    'record',
    [
      ['gridIndex', 'i32'],
      ['slot', 'i32'],
    ],
    'none',
  );
  const at = fn.local('i32', 'at');
  const place = fn.local('i32', 'place');
  const cells = (table: number, perPoint: number, doubled: number): Node[] => [
    set(
      place,
      add(
        add(field(table), op('i32.shl', get(fn.parameter(1, 'i32')), i32(2 + doubled))),
        op(
          'i32.mul',
          op('i32.mul', get(fn.parameter(0, 'i32')), i32(perPoint)),
          op('i32.shl', field(control.cellBytes), i32(doubled)),
        ),
      ),
    ),
  ];
  const nextCell = (doubled: number): Node =>
    set(place, add(get(place), op('i32.shl', field(control.cellBytes), i32(doubled))));
  const [counts, reals] = [prepared.countObservables.length, prepared.realObservables.length];
  const count = op('i32.trunc_sat_f64_s', memory('f64.load', 0, memory('i32.load', 0, get(at))));
  if (counts > 0)
    fn.emit(
      ...cells(control.counts, counts, 0),
      set(at, i32(layout.observables)),
      each(at, i32(layout.observables + 4 * counts), 4, [memory('i32.store', 0, get(place), count), nextCell(0)]),
    );
  if (reals > 0)
    fn.emit(
      ...cells(control.reals, reals, 1),
      set(at, i32(layout.realFunctions)),
      each(at, i32(layout.realFunctions + reals), 1, [
        memory('f64.store', 0, get(place), callIndirect([], [], get(at))),
        nextCell(1),
      ]),
    );
  return fn;
}

function timedFunction(module: ModuleBuilder, context: (fn: FunctionBuilder) => ChangeContext): FunctionBuilder<'i32'> {
  const fn = module.function('makeTimedChanges', [], 'i32');
  const index = fn.local('i32', 'index');
  const moment = fn.local('f64', 'moment');
  return fn.emit(
    set(index, field(control.changeIndex)),
    set(moment, emitChangeTime(index)),
    ...emitScheduledChanges(context(fn as unknown as FunctionBuilder), index, moment),
    memory('i32.store', control.changeIndex, zero, get(index)),
    giveBack(zero),
  );
}

function settleFunction(
  module: ModuleBuilder,
  context: (fn: FunctionBuilder) => ChangeContext,
): FunctionBuilder<'i32'> {
  const fn = module.function('settle', [], 'i32');
  const made = fn.local('i32', 'made');
  return fn.emit(
    ...emitSettleTriggers(context(fn as unknown as FunctionBuilder), made),
    when(get(made), [giveBack(i32(changesMade))]),
    giveBack(zero),
  );
}
