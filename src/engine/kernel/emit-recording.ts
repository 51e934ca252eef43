/** Writes the state at a grid point into the tables of results; shared by the scalar kernel and the SIMD kernel's lanes. */
import type { ExpressionEmitter } from './emit-expression.ts';
import { control } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import type { FunctionBuilder } from './wasm/module-builder.ts';
import { get, i32, memory, op, set, type Local, type Node } from './wasm/node.ts';

const field = (at: number): Node<'i32'> => memory('i32.load', at, i32(0));

/** `gridIndex` and `slot` say where; the state is what `species` and `expressions` read. */
export function emitRecording(
  prepared: PreparedNetwork,
  fn: FunctionBuilder,
  expressions: ExpressionEmitter<'scalar'>,
  species: (index: number) => Node<'f64'>,
  gridIndex: Local<'i32'>,
  slot: Local<'i32'>,
): Node[] {
  const place = fn.local('i32', 'place');
  const value = fn.local('f64', 'value');
  /** Address of this slot in the first cell of the grid point: 4 bytes a count, 8 a real. */
  const firstCell = (table: number, cells: number, doubled: number): Node<'i32'> =>
    op(
      'i32.add',
      op('i32.add', field(table), op('i32.shl', get(slot), i32(2 + doubled))),
      op('i32.mul', op('i32.mul', get(gridIndex), i32(cells)), op('i32.shl', field(control.cellBytes), i32(doubled))),
    );
  const counts = prepared.countObservables.flatMap((index) => [
    memory('i32.store', 0, get(place), op('i32.trunc_sat_f64_s', species(index))),
    set(place, op('i32.add', get(place), field(control.cellBytes))),
  ]);
  const reals = prepared.realObservables.flatMap((term) => [
    ...expressions.assign(value, term),
    memory('f64.store', 0, get(place), get(value)),
    set(place, op('i32.add', get(place), op('i32.shl', field(control.cellBytes), i32(1)))),
  ]);
  const statements: Node[] = [];
  if (counts.length > 0)
    statements.push(set(place, firstCell(control.counts, prepared.countObservables.length, 0)), ...counts);
  if (reals.length > 0)
    statements.push(set(place, firstCell(control.reals, prepared.realObservables.length, 1)), ...reals);
  return statements;
}

/** The time of the grid point at `gridIndex`. */
export const emitGridTime = (gridIndex: Local<'i32'>): Node<'f64'> =>
  memory('f64.load', 0, op('i32.add', field(control.gridTimes), op('i32.shl', get(gridIndex), i32(3))));

/** Statements that store the firings of the replicate in `slot`. */
export const emitStoreFirings = (slot: Local<'i32'>, firings: Node<'f64'>): Node =>
  memory('f64.store', 0, op('i32.add', field(control.events), op('i32.shl', get(slot), i32(3))), firings);

/** The key from which the replicate in `slot` is seeded, before mixing. */
export const emitReplicateKey = (slot: Local<'i32'>): Node<'i64'> =>
  op(
    'i64.add',
    op('i64.add', memory('i64.load', control.streamBase, i32(0)), memory('i64.load', control.firstReplicate, i32(0))),
    op('i64.extend_i32_u', get(slot)),
  );
