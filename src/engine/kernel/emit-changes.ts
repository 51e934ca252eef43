/**
 * Timed and triggered changes as generated code, on single numbers: the same operations in the same order as
 * exact/changes.ts. The scalar kernel keeps the state in locals, the SIMD kernel's lanes in tables.
 */
import { limits } from '@/domain/limits.ts';
import { wholeTolerance } from '../exact/changes.ts';
import type { ExpressionEmitter } from './emit-expression.ts';
import { control, largestCount, scheduleEntryBytes, status } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import type { FunctionBuilder } from './wasm/module-builder.ts';
import {
  block,
  branch,
  branchIf,
  branchTable,
  f64,
  get,
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

export interface ChangeContext {
  prepared: PreparedNetwork;
  fn: FunctionBuilder;
  expressions: ExpressionEmitter<'scalar'>;
  /** Brings the assigned parameters up to date. */
  assign(): Node[];
  state: { get(place: number): Node<'f64'>; set(place: number, value: Node<'f64'>): Node };
  /** What to do where a change cannot be made; the state is as before it. */
  fail(answer: number, change: number): Node[];
}

/** Works out the assigned parameters into their locals. */
export const emitAssignments = (
  prepared: PreparedNetwork,
  expressions: ExpressionEmitter<'scalar'>,
  assigned: Local<'f64'>[],
): Node[] => prepared.assigned.flatMap((term, index) => expressions.assign(assigned[index]!, term));

export const timedChanges = ({ changes }: PreparedNetwork): number[] =>
  changes.flatMap(({ condition }, change) => (condition === null ? [change] : []));

const triggeredChanges = ({ changes }: PreparedNetwork): number[] =>
  changes.flatMap(({ condition }, change) => (condition === null ? [] : [change]));

export const hasTriggers = ({ changes }: PreparedNetwork): boolean =>
  changes.some(({ condition }) => condition !== null);

/** Makes one change: all values first, then their check, then all sets. */
function emitMakeChange(context: ChangeContext, change: number): Node[] {
  const { prepared, fn, expressions, state } = context;
  const sets = prepared.changes[change]!.sets.map((one) => ({ ...one, local: fn.local('f64', 'value') }));
  const bad = fn.local('i32', 'bad');
  const badIf = (condition: Node<'i32'>): Node => set(bad, op('i32.or', get(bad), op('i32.eqz', condition)));
  const check = ({ isCount, local }: (typeof sets)[number]): Node[] => {
    if (!isCount) return [badIf(op('f64.lt', op('f64.abs', get(local)), f64(Infinity)))];
    const whole = fn.local('f64', 'whole');
    const tolerance = op('f64.mul', f64(wholeTolerance), op('f64.max', f64(1), op('f64.abs', get(local))));
    return [
      // Adding 0 makes −0 an ordinary 0.
      set(whole, op('f64.add', op('f64.nearest', get(local)), f64(0))),
      badIf(op('f64.le', op('f64.abs', op('f64.sub', get(local), get(whole))), tolerance)),
      badIf(op('f64.ge', get(whole), f64(0))),
      badIf(op('f64.le', get(whole), f64(largestCount))),
      set(local, get(whole)),
    ];
  };
  return [
    ...context.assign(),
    ...sets.flatMap(({ local, value }) => expressions.assign(local, value)),
    set(bad, i32(0)),
    ...sets.flatMap(check),
    when(get(bad), context.fail(status.badAssignment, change)),
    ...sets.map(({ place, local }) => state.set(place, get(local))),
  ];
}

/** Lets triggered changes happen until none is due; leaves in `made` how many were made. */
export function emitSettleTriggers(context: ChangeContext, made = context.fn.local('i32', 'made')): Node[] {
  const { prepared, fn, expressions, state } = context;
  const triggered = triggeredChanges(prepared);
  if (triggered.length === 0) return [];
  const again = label('lookAgain');
  const holds = fn.local('f64', 'holds');
  const due = new Map(triggered.map((change) => [change, fn.local('i32', `due${change}`)]));
  const look = triggered.flatMap((change) => {
    const { condition, held } = prepared.changes[change]!;
    return [
      ...expressions.assign(holds, condition!),
      set(holds, select(f64(1), f64(0), op('f64.ne', get(holds), f64(0)))),
      when(op('f64.gt', get(holds), state.get(held!)), [set(due.get(change)!, i32(1))]),
      state.set(held!, get(holds)),
    ];
  });
  const makeFirstDue = triggered.map((change) =>
    when(get(due.get(change)!), [
      when(op('i32.eq', get(made), i32(limits.changeCascade)), context.fail(status.changeCascade, change)),
      set(made, op('i32.add', get(made), i32(1))),
      set(due.get(change)!, i32(0)),
      ...emitMakeChange(context, change),
      branch(again),
    ]),
  );
  return [set(made, i32(0)), loop(again, ...context.assign(), ...look, ...makeFirstDue)];
}

/** The time of the entry at `index` of the schedule. */
export const emitChangeTime = (index: Local<'i32'>): Node<'f64'> => memory('f64.load', 0, entry(index));

const entry = (index: Local<'i32'>): Node<'i32'> =>
  op('i32.add', memory('i32.load', control.schedule, i32(0)), op('i32.mul', get(index), i32(scheduleEntryBytes)));

/** Makes the timed changes of the moment `nextChangeTime` in order; moves `index` and `nextChangeTime` past them. */
export function emitScheduledChanges(
  context: ChangeContext,
  index: Local<'i32'>,
  nextChangeTime: Local<'f64'>,
): Node[] {
  const timed = timedChanges(context.prepared);
  const moment = context.fn.local('f64', 'moment');
  const again = label('nextChange');
  const made = label('made');
  const cases = timed.map((change) => label(`change${change}`));
  let inner: Node[] = [branchTable(cases.slice(0, -1), cases.at(-1)!, memory('i32.load', 8, entry(index)))];
  timed.forEach((change, position) => {
    inner = [block(cases[position]!, ...inner), ...emitMakeChange(context, change), branch(made)];
  });
  return [
    set(moment, get(nextChangeTime)),
    loop(
      again,
      block(made, ...inner),
      set(index, op('i32.add', get(index), i32(1))),
      set(nextChangeTime, emitChangeTime(index)),
      branchIf(again, op('f64.eq', get(nextChangeTime), get(moment))),
    ),
  ];
}
