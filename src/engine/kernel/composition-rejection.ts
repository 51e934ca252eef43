/**
 * Generates the kernel for large networks: composition-rejection with a dependency graph, one replicate at a time. What it
 * computes is written in exact/composition-rejection.ts. The code of a network of mass action is of one size: reactions stand in
 * tables (group-layout.ts), and the state in memory.
 */
import { emitLogarithmOfNormal } from './elementary/logarithm.ts';
import { emitChangeTime } from './emit-changes.ts';
import { emitNext, emitSeeding, generatorLocals, onePlusUniform } from './emit-random.ts';
import { emitGridTime, emitReplicateKey, emitStoreFirings } from './emit-recording.ts';
import { groupFunctions, offsetInPage, pageEntry } from './group-functions.ts';
import { change, firing, group, record, type GroupLayout } from './group-layout.ts';
import { scalarLanes as lanes } from './lanes.ts';
import { control, largestCount, largestTotal, status, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import { changesMade, each, stateFunctions } from './state-functions.ts';
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
} from './wasm/node.ts';
import type { Local, Node } from './wasm/node.ts';

const zero = i32(0);
const field = (at: number): Node<'i32'> => memory('i32.load', at, zero);

/** `run(events: i32): i32` goes on for at most so many firings and answers a `status`, as the direct kernels'. */
export function compositionRejectionModule(
  prepared: PreparedNetwork,
  layout: GroupLayout,
  module = new ModuleBuilder(),
): ModuleBuilder {
  const { savedState, initialState } = structureLayout(prepared);
  const state = stateFunctions(prepared, layout, module);
  const groups = groupFunctions(prepared, layout, module);
  const fn = module.function('run', [['chunk', 'i32']], 'i32', { exported: true });
  const chunk = fn.parameter(0, 'i32');
  const time = fn.local('f64', 'time');
  const newTime = fn.local('f64', 'newTime');
  const nextGridTime = fn.local('f64', 'nextGridTime');
  const gridIndex = fn.local('i32', 'gridIndex');
  const firings = fn.local('f64', 'firings');
  const eventLimit = fn.local('f64', 'eventLimit');
  const slot = fn.local('i32', 'slot');
  const total = fn.local('f64', 'total');
  const threshold = fn.local('f64', 'threshold');
  const at = fn.local('i32', 'at');
  const answer = fn.local('i32', 'answer');
  /** What altered the state last, as an entry of the table of firings; 0 where propensities are up to date. */
  const altered = fn.local('i32', 'altered');
  const generator = generatorLocals(lanes, fn);
  const draw = op('f64.sub', onePlusUniform(lanes, get(generator.output)), f64(1));

  const save = (): Node[] => [
    memory('f64.store', control.time, zero, get(time)),
    memory('i32.store', control.gridIndex, zero, get(gridIndex)),
    memory('f64.store', control.firings, zero, get(firings)),
    memory('i32.store', control.slot, zero, get(slot)),
    ...generator.state.map((word, i) => memory('i64.store', control.generator + 8 * i, zero, get(word))),
  ];
  const stop = (code: Node<'i32'>, when_: Local<'f64'> = time): Node[] => [
    memory('f64.store', control.failureTime, zero, get(when_)),
    ...save(),
    giveBack(code),
  ];
  const list = (begin: number): Node<'i32'> => memory('i32.load', begin, get(altered));

  const nextReplicate = label('nextReplicate');
  const nextState = label('nextState');
  const nextGridPoint = label('nextGridPoint');

  const begin: Node[] = [
    when(op('i32.eq', get(slot), field(control.slotCount)), [...save(), giveBack(i32(status.finished))]),
    ...emitSeeding(module, fn, generator.state, emitReplicateKey(slot)),
    set(at, zero),
    each(at, i32(8 * prepared.stateSize), 8, [
      memory('f64.store', savedState, get(at), memory('f64.load', initialState, get(at))),
    ]),
    call(groups.clear),
    set(altered, i32(layout.everything)),
    set(time, f64(0)),
    set(firings, f64(0)),
    set(gridIndex, zero),
    memory('i32.store', control.changeIndex, zero, zero),
    ...(state.beginPassages ? [call(state.beginPassages, get(slot))] : []),
    memory('i32.store', control.active, zero, i32(1)),
  ];

  /** Brings everything up to date with the state. */
  const attend: Node[] = [
    ...(state.assign ? [call(state.assign, list(firing.assigned), list(firing.assignedEnd))] : []),
    ...(state.settle
      ? [
          set(answer, call(state.settle)),
          when(op('i32.gt_s', get(answer), zero), stop(get(answer))),
          when(op('i32.eq', get(answer), i32(changesMade)), [
            set(altered, i32(layout.everything)),
            ...(state.assign ? [call(state.assign, list(firing.assigned), list(firing.assignedEnd))] : []),
          ]),
        ]
      : []),
    ...(state.notePassages ? [call(state.notePassages, get(slot), get(time))] : []),
    ...groups.emitRefresh(fn, altered, stop(i32(status.badPropensity))),
  ];

  const activeGroup = memory('i32.load', 0, get(at));
  const addUp: Node[] = [
    set(total, f64(0)),
    set(at, i32(layout.active)),
    each(at, op('i32.add', i32(layout.active), op('i32.shl', field(layout.activeCount), i32(2))), 4, [
      set(total, op('f64.add', get(total), memory('f64.load', group.sum, activeGroup))),
    ]),
    when(op('i32.eqz', op('f64.le', get(total), f64(largestTotal))), stop(i32(status.badPropensity))),
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
    set(threshold, op('f64.mul', draw, get(total))),
  ];
  const timed = state.makeTimedChanges;
  const nextChangeTime = fn.local('f64', 'nextChangeTime');
  const changeIndex = fn.local('i32', 'changeIndex');
  const lookUpChange: Node[] = timed
    ? [set(changeIndex, field(control.changeIndex)), set(nextChangeTime, emitChangeTime(changeIndex))]
    : [];
  /** Where the course of firings is interrupted next. */
  const nextStopTime = timed ? op('f64.min', get(nextGridTime), get(nextChangeTime)) : get(nextGridTime);
  const makeTimedChanges: Node[] = timed
    ? [
        when(op('f64.le', get(nextChangeTime), get(nextGridTime)), [
          set(time, get(nextChangeTime)),
          set(answer, call(timed)),
          when(get(answer), stop(get(answer))),
          ...lookUpChange,
          set(altered, i32(layout.everything)),
          branch(nextState),
        ]),
      ]
    : [];
  const recordGridPoint: Node[] = [
    call(state.record, get(gridIndex), get(slot)),
    set(gridIndex, op('i32.add', get(gridIndex), i32(1))),
    when(op('i32.gt_s', get(gridIndex), field(control.gridIntervals)), [
      emitStoreFirings(slot, get(firings)),
      set(slot, op('i32.add', get(slot), i32(1))),
      memory('i32.store', control.active, zero, zero),
      branch(nextReplicate),
    ]),
    set(nextGridTime, emitGridTime(gridIndex)),
  ];

  const { statements: choose, chosen } = emitChoice(layout, fn, threshold, emitNext(lanes, generator), draw);
  fn.emit(
    set(slot, field(control.slot)),
    set(eventLimit, memory('f64.load', control.eventLimit, zero)),
    set(time, memory('f64.load', control.time, zero)),
    set(gridIndex, field(control.gridIndex)),
    set(firings, memory('f64.load', control.firings, zero)),
    ...generator.state.map((word, i) => set(word, memory('i64.load', control.generator + 8 * i, zero))),
    loop(
      nextReplicate,
      when(op('i32.eqz', field(control.active)), begin),
      set(nextGridTime, emitGridTime(gridIndex)),
      ...lookUpChange,
      loop(
        nextState,
        when(get(altered), attend),
        when(op('i32.eqz', get(chunk)), [...save(), giveBack(i32(status.paused))]),
        ...addUp,
        ...advance,
        when(op('i32.eqz', op('f64.le', get(newTime), nextStopTime)), [
          loop(
            nextGridPoint,
            ...makeTimedChanges,
            ...recordGridPoint,
            branchIf(nextGridPoint, op('f64.gt', get(newTime), nextStopTime)),
          ),
        ]),
        when(op('f64.ge', get(firings), get(eventLimit)), stop(i32(status.eventLimit), newTime)),
        ...choose,
        set(altered, memory('i32.load', record.firing, get(chosen))),
        ...emitFiring(fn, altered, [
          memory('i32.store', control.failedIndex, zero, indexOf(layout, chosen)),
          ...stop(i32(status.countOverflow), newTime),
        ]),
        set(time, get(newTime)),
        set(firings, op('f64.add', get(firings), f64(1))),
        set(chunk, op('i32.sub', get(chunk), i32(1))),
        branch(nextState),
      ),
    ),
    giveBack(i32(status.finished)),
  );
  return module;
}

const indexOf = (layout: GroupLayout, chosen: Local<'i32'>): Node<'i32'> =>
  op('i32.div_u', op('i32.sub', get(chosen), i32(layout.records)), i32(record.bytes));
/** The group by the prefix sums from the largest exponent down, then members until one is taken; its record in `chosen`. */
function emitChoice(
  layout: GroupLayout,
  fn: FunctionBuilder,
  threshold: Local<'f64'>,
  next: Node[],
  draw: Node<'f64'>,
): { statements: Node[]; chosen: Local<'i32'> } {
  const nextGroup = label('nextGroup');
  const nextMember = label('nextMember');
  const at = fn.local('i32', 'at');
  const prefix = fn.local('f64', 'prefix');
  const groupAt = fn.local('i32', 'group');
  const size = fn.local('f64', 'size');
  const bound = fn.local('f64', 'bound');
  const drawn = fn.local('f64', 'drawn');
  const place = fn.local('i32', 'place');
  const chosen = fn.local('i32', 'chosen');
  const fraction = op('f64.sub', get(drawn), op('f64.convert_i32_s', get(place)));
  const statements = [
    set(prefix, f64(0)),
    set(at, i32(layout.active)),
    loop(
      nextGroup,
      set(groupAt, memory('i32.load', 0, get(at))),
      set(at, op('i32.add', get(at), i32(4))),
      set(prefix, op('f64.add', get(prefix), memory('f64.load', group.sum, get(groupAt)))),
      branchIf(nextGroup, op('f64.le', get(prefix), get(threshold))),
    ),
    set(size, op('f64.convert_i32_s', memory('i32.load', group.size, get(groupAt)))),
    set(bound, memory('f64.load', group.bound, get(groupAt))),
    loop(
      nextMember,
      ...next,
      set(drawn, op('f64.mul', draw, get(size))),
      set(place, op('i32.trunc_sat_f64_s', get(drawn))),
      set(
        chosen,
        memory('i32.load', 0, op('i32.add', memory('i32.load', 0, pageEntry(groupAt, place)), offsetInPage(place))),
      ),
      branchIf(
        nextMember,
        op('f64.ge', op('f64.mul', fraction, get(bound)), memory('f64.load', record.propensity, get(chosen))),
      ),
    ),
  ];
  return { statements, chosen };
}

/** Makes the changes of a firing; when a count comes out too large they are taken back, and `overflow` leaves. */
function emitFiring(fn: FunctionBuilder, fired: Local<'i32'>, overflow: Node[]): Node[] {
  const at = fn.local('i32', 'at');
  const place = fn.local('i32', 'place');
  const count = fn.local('f64', 'count');
  const tooLarge = fn.local('i32', 'tooLarge');
  const end = memory('i32.load', firing.changesEnd, get(fired));
  const step = op('f64.convert_i32_s', memory('i32.load', change.count, get(at)));
  const begin = set(at, op('i32.add', get(fired), i32(firing.changes)));
  return [
    set(tooLarge, zero),
    begin,
    each(at, end, change.bytes, [
      set(place, memory('i32.load', change.place, get(at))),
      set(count, op('f64.add', memory('f64.load', 0, get(place)), step)),
      memory('f64.store', 0, get(place), get(count)),
      set(tooLarge, op('i32.or', get(tooLarge), op('f64.gt', get(count), f64(largestCount)))),
    ]),
    when(get(tooLarge), [
      begin,
      each(at, end, change.bytes, [
        set(place, memory('i32.load', change.place, get(at))),
        memory('f64.store', 0, get(place), op('f64.sub', memory('f64.load', 0, get(place)), step)),
      ]),
      ...overflow,
    ]),
  ];
}
