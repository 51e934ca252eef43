/** Notes times of first passage in the table of results: when the value of a passage first is at or past its threshold. */
import type { ChangeContext } from './emit-changes.ts';
import { control } from './memory-layout.ts';
import { f64, get, i32, memory, op, set, when, type Local, type Node } from './wasm/node.ts';

const field = (at: number): Node<'i32'> => memory('i32.load', at, i32(0));

/** Address of the time of passage 0 of the replicate in `slot`; the next passage's lies 8 · slots further. */
const place = (slot: Local<'i32'>, passage: number): Node<'i32'> =>
  op(
    'i32.add',
    op('i32.add', field(control.passages), op('i32.shl', get(slot), i32(3))),
    op('i32.mul', op('i32.shl', field(control.cellBytes), i32(1)), i32(passage)),
  );

/** No passage yet: all times are infinite. */
export const emitNoPassages = ({ prepared }: ChangeContext, slot: Local<'i32'>, passed: Local<'i32'>): Node[] =>
  prepared.passages.length === 0
    ? []
    : [
        set(passed, i32(0)),
        ...prepared.passages.map((_, passage) => memory('f64.store', 0, place(slot, passage), f64(Infinity))),
      ];

/** Looks at the present state, which began at `time`. `passed` has a bit for each passage made. */
export function emitPassages(
  context: ChangeContext,
  slot: Local<'i32'>,
  time: Local<'f64'>,
  passed: Local<'i32'>,
): Node[] {
  const { prepared, fn, expressions } = context;
  if (prepared.passages.length === 0) return [];
  const value = fn.local('f64', 'passageValue');
  const all = 2 ** prepared.passages.length - 1;
  return [
    when(op('i32.ne', get(passed), i32(all)), [
      ...context.assign(),
      ...prepared.passages.map(({ value: term, direction, threshold }, passage) =>
        when(op('i32.eqz', op('i32.and', get(passed), i32(1 << passage))), [
          ...expressions.assign(value, term),
          when(op(direction === 'rises_to' ? 'f64.ge' : 'f64.le', get(value), f64(threshold)), [
            memory('f64.store', 0, place(slot, passage), get(time)),
            set(passed, op('i32.or', get(passed), i32(1 << passage))),
          ]),
        ]),
      ),
    ]),
  ];
}
