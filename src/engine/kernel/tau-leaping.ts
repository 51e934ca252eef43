/**
 * Generates the tau-leaping kernel: one WebAssembly module per network structure, one replicate at a time, the state in memory.
 * What it computes, operation by operation, is written in leaping/tau-leaping.ts, whose numbering it follows.
 */
import { exactStepsInARow, leastFiringsOfLeap } from '../leaping/tau-leaping.ts';
import { emitFiring } from './direct-scalar.ts';
import { logarithmFunction } from './elementary/logarithm.ts';
import { emitChangeTime, emitScheduledChanges, timedChanges, type ChangeContext } from './emit-changes.ts';
import { ExpressionEmitter } from './emit-expression.ts';
import { emitNoPassages, emitPassages } from './emit-passages.ts';
import { uniformFunction } from './emit-poisson.ts';
import { emitSeeding } from './emit-random.ts';
import { emitGridTime, emitRecording, emitReplicateKey, emitStoreFirings } from './emit-recording.ts';
import { selectStepFunction } from './emit-step-selection.ts';
import { scalarLanes as lanes } from './lanes.ts';
import { assignFunction, drawFunction, leapFunctions, propensitiesFunction } from './leap-functions.ts';
import { leapLayout } from './leap-layout.ts';
import { control, status, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import { each } from './state-functions.ts';
import { ModuleBuilder, type FunctionBuilder } from './wasm/module-builder.ts';
import {
  branch,
  branchIf,
  call,
  f64,
  get,
  giveBack,
  i32,
  label,
  loop,
  memory,
  op,
  select,
  set,
  when,
  type Local,
  type Node,
} from './wasm/node.ts';

const zero = i32(0);
const field = (at: number): Node<'i32'> => memory('i32.load', at, zero);
const load = (at: number): Node<'f64'> => memory('f64.load', at, zero);
const store = (at: number, value: Node<'f64'>): Node => memory('f64.store', at, zero, value);

/** `run(events: i32): i32` goes on for about so many events and answers a `status`, as the direct kernels'. */
export function tauLeapingModule(prepared: PreparedNetwork, module = new ModuleBuilder()): ModuleBuilder {
  const layout = leapLayout(prepared);
  const { savedState, initialState, constants } = structureLayout(prepared);
  const stateAt = (place: number): Node<'f64'> => load(savedState + 8 * place);
  const expressionsOf = (fn: FunctionBuilder): ExpressionEmitter<'scalar'> =>
    new ExpressionEmitter(lanes, module, fn, {
      species: stateAt,
      constant: (slot) => load(constants + 8 * slot),
      assigned: (index) => load(layout.assigned + 8 * index),
    });
  const logarithm = logarithmFunction(module);
  const uniform = uniformFunction(module);
  const assign = prepared.assigned.length > 0 ? assignFunction(prepared, layout, module, expressionsOf) : null;
  const propensities = propensitiesFunction(prepared, layout, module, expressionsOf);
  const selectStep = selectStepFunction(prepared, layout, module);
  const draw = drawFunction(layout, module);
  const { leap: makeLeap, takeBack } = leapFunctions(prepared, layout, module);

  const fn = module.function('run', [['chunk', 'i32']], 'i32', { exported: true });
  const chunk = fn.parameter(0, 'i32');
  const slot = fn.local('i32', 'slot');
  const time = fn.local('f64', 'time');
  const newTime = fn.local('f64', 'newTime');
  const nextGridTime = fn.local('f64', 'nextGridTime');
  const nextChangeTime = fn.local('f64', 'nextChangeTime');
  const gridIndex = fn.local('i32', 'gridIndex');
  const changeIndex = fn.local('i32', 'changeIndex');
  const passed = fn.local('i32', 'passed');
  const events = fn.local('f64', 'events');
  const eventLimit = fn.local('f64', 'eventLimit');
  const exactSteps = fn.local('i32', 'exactSteps');
  const longest = fn.local('f64', 'longest');
  /** 1 after a leap that its propensities may yet spoil; where it began, and how long it could have been. */
  const leaped = fn.local('i32', 'leaped');
  const timeBefore = fn.local('f64', 'timeBefore');
  const lengthBefore = fn.local('f64', 'lengthBefore');
  const total = fn.local('f64', 'total');
  const at = fn.local('i32', 'at');

  const save = (): Node[] => [
    store(control.time, get(time)),
    memory('i32.store', control.gridIndex, zero, get(gridIndex)),
    memory('i32.store', control.changeIndex, zero, get(changeIndex)),
    memory('i32.store', control.passed, zero, get(passed)),
    memory('i32.store', control.exactSteps, zero, get(exactSteps)),
    store(control.longestLeap, get(longest)),
    store(control.firings, get(events)),
    memory('i32.store', control.slot, zero, get(slot)),
  ];
  const stop = (answer: number, when_: Local<'f64'> = time): Node[] => [
    store(control.failureTime, get(when_)),
    ...save(),
    giveBack(i32(answer)),
  ];
  const changing: ChangeContext = {
    prepared,
    fn,
    expressions: expressionsOf(fn),
    assign: () => (assign ? [call(assign)] : []),
    state: { get: stateAt, set: (place, value) => store(savedState + 8 * place, value) },
    fail: (answer, change) => [memory('i32.store', control.failedIndex, zero, i32(change)), ...stop(answer)],
  };
  const timed = timedChanges(prepared).length > 0;
  /** The next grid time or timed change. */
  const nextStopTime = timed ? op('f64.min', get(nextGridTime), get(nextChangeTime)) : get(nextGridTime);

  const nextReplicate = label('nextReplicate');
  const nextState = label('nextState');
  const begin: Node[] = [
    when(op('i32.eq', get(slot), field(control.slotCount)), [...save(), giveBack(i32(status.finished))]),
    ...emitSeedingIntoMemory(module, fn, slot),
    set(at, zero),
    each(at, i32(8 * prepared.stateSize), 8, [
      memory('f64.store', savedState, get(at), memory('f64.load', initialState, get(at))),
    ]),
    set(time, f64(0)),
    set(events, f64(0)),
    set(gridIndex, zero),
    set(changeIndex, zero),
    set(exactSteps, zero),
    set(longest, f64(Infinity)),
    ...emitNoPassages(changing, slot, passed),
    memory('i32.store', control.active, zero, i32(1)),
  ];
  /** Makes the changes, or writes the grid time, that `nextStopTime` is; goes on with `again` after a grid time. */
  const attendStop = (again: Node): Node[] => [
    ...(timed
      ? [
          when(op('f64.le', get(nextChangeTime), get(nextGridTime)), [
            set(time, get(nextChangeTime)),
            ...emitScheduledChanges(changing, changeIndex, nextChangeTime),
            set(longest, f64(Infinity)),
            branch(nextState),
          ]),
        ]
      : []),
    ...emitRecording(prepared, fn, changing.expressions, stateAt, gridIndex, slot),
    set(gridIndex, op('i32.add', get(gridIndex), i32(1))),
    when(op('i32.gt_s', get(gridIndex), field(control.gridIntervals)), [
      emitStoreFirings(slot, get(events)),
      set(slot, op('i32.add', get(slot), i32(1))),
      memory('i32.store', control.active, zero, zero),
      branch(nextReplicate),
    ]),
    set(nextGridTime, emitGridTime(gridIndex)),
    again,
  ];

  const refresh: Node[] = [
    ...changing.assign(),
    when(call(propensities), [
      when(op('i32.eqz', get(leaped)), stop(status.badPropensity)),
      call(takeBack),
      set(time, get(timeBefore)),
      set(longest, op('f64.div', get(lengthBefore), f64(2))),
      set(leaped, zero),
      branch(nextState),
    ]),
    when(get(leaped), [set(longest, f64(Infinity)), set(leaped, zero)]),
    set(total, load(layout.total)),
    ...emitPassages({ ...changing, assign: () => [] }, slot, time, passed),
    when(op('i32.le_s', get(chunk), zero), [...save(), giveBack(i32(status.paused))]),
  ];

  const waitingDraw = fn.local('f64', 'waitingDraw');
  const threshold = fn.local('f64', 'threshold');
  const chosen = fn.local('i32', 'chosen');
  /** ln(1 − uniform): what the direct kernels work out in line. */
  const logarithmOfDraw = call(logarithm, op('f64.sub', f64(1), get(waitingDraw)));
  const nextStop = label('nextStop');
  const exactStep: Node[] = [
    set(waitingDraw, call(uniform)),
    set(threshold, op('f64.mul', call(uniform), get(total))),
    set(
      newTime,
      select(
        f64(Infinity),
        op('f64.sub', get(time), op('f64.div', logarithmOfDraw, get(total))),
        op('f64.eq', get(total), f64(0)),
      ),
    ),
    loop(nextStop, when(op('f64.gt', get(newTime), nextStopTime), attendStop(branch(nextStop)))),
    when(op('f64.ge', get(events), get(eventLimit)), stop(status.eventLimit, newTime)),
    ...emitChoice(fn, layout.propensities, prepared.reactions.length, threshold, chosen),
    emitFiring(prepared, changing.state, chosen, (reaction) => [
      memory('i32.store', control.failedIndex, zero, i32(reaction)),
      ...stop(status.countOverflow, newTime),
    ]),
    set(time, get(newTime)),
    set(events, op('f64.add', get(events), f64(1))),
    set(exactSteps, op('i32.sub', get(exactSteps), i32(1))),
    set(chunk, op('i32.sub', get(chunk), i32(1))),
    branch(nextState),
  ];

  const tau = fn.local('f64', 'tau');
  const length = fn.local('f64', 'length');
  const toStop = fn.local('f64', 'toStop');
  const within = fn.local('f64', 'within');
  const waiting = fn.local('f64', 'waiting');
  const leap = fn.local('f64', 'leap');
  const drawn = fn.local('f64', 'drawn');
  const criticalTotal = load(layout.criticalTotal);
  const nextDue = label('nextDue');
  const nextAttempt = label('nextAttempt');
  const worthLeaping = op(
    'i32.and',
    op('f64.gt', load(layout.leapingTotal), f64(0)),
    op('f64.ge', get(within), op('f64.div', f64(leastFiringsOfLeap), get(total))),
  );
  const attempt: Node[] = [
    set(length, op('f64.min', get(tau), get(longest))),
    set(toStop, op('f64.sub', nextStopTime, get(time))),
    set(within, op('f64.min', get(length), get(toStop))),
    when(op('i32.eqz', worthLeaping), [
      set(exactSteps, i32(exactStepsInARow)),
      set(longest, f64(Infinity)),
      branch(nextState),
    ]),
    set(waiting, f64(Infinity)),
    when(op('f64.gt', criticalTotal, f64(0)), [
      set(waitingDraw, call(uniform)),
      set(waiting, op('f64.div', op('f64.neg', logarithmOfDraw), criticalTotal)),
    ]),
    set(leap, op('f64.min', get(within), get(waiting))),
    set(chosen, i32(-1)),
    when(op('f64.lt', get(waiting), get(within)), [
      set(threshold, op('f64.mul', call(uniform), criticalTotal)),
      ...emitChoice(fn, layout.critical, prepared.reactions.length, threshold, chosen),
    ]),
    set(drawn, call(draw, get(leap))),
    when(op('i32.ge_s', get(chosen), zero), [
      memory('f64.store', layout.firings, op('i32.shl', get(chosen), i32(3)), f64(1)),
      set(drawn, op('f64.add', get(drawn), f64(1))),
    ]),
    set(newTime, select(nextStopTime, op('f64.add', get(time), get(leap)), op('f64.eq', get(leap), get(toStop)))),
    set(events, op('f64.add', get(events), get(drawn))),
    set(chunk, op('i32.sub', get(chunk), op('i32.trunc_sat_f64_s', get(drawn)))),
    when(op('f64.gt', get(events), get(eventLimit)), stop(status.eventLimit, newTime)),
    when(call(makeLeap), [
      set(leaped, i32(1)),
      set(timeBefore, get(time)),
      set(lengthBefore, get(length)),
      set(time, get(newTime)),
      branch(nextState),
    ]),
    set(longest, op('f64.div', get(length), f64(2))),
    branch(nextAttempt),
  ];

  fn.emit(
    set(slot, field(control.slot)),
    set(eventLimit, load(control.eventLimit)),
    set(time, load(control.time)),
    set(gridIndex, field(control.gridIndex)),
    set(changeIndex, field(control.changeIndex)),
    set(passed, field(control.passed)),
    set(exactSteps, field(control.exactSteps)),
    set(longest, load(control.longestLeap)),
    set(events, load(control.firings)),
    loop(
      nextReplicate,
      when(op('i32.eqz', field(control.active)), begin),
      set(nextGridTime, emitGridTime(gridIndex)),
      ...(timed ? [set(nextChangeTime, emitChangeTime(changeIndex))] : []),
      loop(
        nextState,
        ...refresh,
        when(get(exactSteps), exactStep),
        loop(nextDue, when(op('f64.le', nextStopTime, get(time)), attendStop(branch(nextDue)))),
        set(tau, call(selectStep)),
        loop(nextAttempt, ...attempt),
      ),
    ),
    giveBack(i32(status.finished)),
  );
  return module;
}

/** The first reaction whose prefix sum in the table is above `threshold`; the last where none is. */
function emitChoice(
  fn: FunctionBuilder,
  table: number,
  reactions: number,
  threshold: Local<'f64'>,
  chosen: Local<'i32'>,
): Node[] {
  const prefix = fn.local('f64', 'prefix');
  const next = label('nextReaction');
  return [
    set(prefix, f64(0)),
    set(chosen, i32(-1)),
    loop(
      next,
      set(chosen, op('i32.add', get(chosen), i32(1))),
      set(prefix, op('f64.add', get(prefix), memory('f64.load', table, op('i32.shl', get(chosen), i32(3))))),
      branchIf(
        next,
        op('i32.and', op('f64.le', get(prefix), get(threshold)), op('i32.lt_s', get(chosen), i32(reactions - 1))),
      ),
    ),
  ];
}

/** The generator of the replicate in `slot`, into the control block. */
function emitSeedingIntoMemory(module: ModuleBuilder, fn: FunctionBuilder, slot: Local<'i32'>): Node[] {
  const words = ['s0', 's1', 's2', 's3'].map((name) => fn.local('i64', name));
  return [
    ...emitSeeding(module, fn, words, emitReplicateKey(slot)),
    ...words.map((word, i) => memory('i64.store', control.generator + 8 * i, zero, get(word))),
  ];
}
