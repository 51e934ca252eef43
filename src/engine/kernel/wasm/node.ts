/**
 * WebAssembly code as a typed tree: each node knows what it gives, so that the compiler of this project refuses ill-typed kernels.
 * `encode-module.ts` turns trees into bytes, `print-module.ts` into text.
 */
import {
  instructions,
  laneInstructions,
  laneMemoryInstructions,
  memoryInstructions,
  type LaneMemoryOperation,
  type LaneOperation,
  type MemoryOperation,
  type Operation,
  type ValueType,
} from './opcodes.ts';

export type Gives = ValueType | 'none';

/** A local variable or parameter of a function. */
export interface Local<T extends ValueType = ValueType> {
  readonly type: T;
  readonly index: number;
  readonly name: string;
}

/** Something that can be called: `index` is settled when the module is encoded. */
export interface Callable<G extends Gives = Gives> {
  readonly name: string;
  readonly takes: readonly ValueType[];
  readonly gives: G;
}

/** A place that `branch` leaves (block) or returns to (loop). Compared by identity. */
export interface Label {
  readonly name: string;
}

export type NodeKind =
  | { kind: 'operation'; code: readonly number[]; immediates: readonly number[] }
  | { kind: 'memory'; code: readonly number[]; alignment: number; offset: number; lane: number | null }
  | { kind: 'i32.const'; value: number }
  | { kind: 'i64.const'; value: bigint }
  | { kind: 'f64.const'; value: number }
  | { kind: 'v128.const'; low: bigint; high: bigint }
  | { kind: 'local'; action: 'get' | 'set' | 'tee'; local: Local }
  | { kind: 'call'; target: Callable }
  | { kind: 'callIndirect'; takes: readonly ValueType[] }
  | { kind: 'block'; label: Label; body: readonly Node[] }
  | { kind: 'loop'; label: Label; body: readonly Node[] }
  | { kind: 'if'; body: readonly Node[]; otherwise: readonly Node[] }
  | { kind: 'branch'; label: Label; conditional: boolean }
  | { kind: 'branchTable'; labels: readonly Label[]; fallback: Label }
  | { kind: 'select' }
  | { kind: 'return' }
  | { kind: 'drop' };

export interface Node<G extends Gives = Gives> {
  readonly name: string;
  readonly gives: G;
  readonly operands: readonly Node[];
  readonly detail: NodeKind;
}

type NodesOf<T extends readonly ValueType[]> = { -readonly [I in keyof T]: Node<T[I]> };

const node = <G extends Gives>(name: string, gives: G, operands: readonly Node[], detail: NodeKind): Node<G> => ({
  name,
  gives,
  operands,
  detail,
});

export function op<O extends Operation>(
  name: O,
  ...operands: NodesOf<(typeof instructions)[O]['takes']>
): Node<(typeof instructions)[O]['gives']> {
  const { code, gives } = instructions[name];
  return node(name, gives, operands as Node[], { kind: 'operation', code, immediates: [] });
}

export function lane<O extends LaneOperation>(
  name: O,
  index: number,
  ...operands: NodesOf<(typeof laneInstructions)[O]['takes']>
): Node<(typeof laneInstructions)[O]['gives']> {
  const { code, gives } = laneInstructions[name];
  return node(name, gives, operands as Node[], { kind: 'operation', code, immediates: [index] });
}

/** A load or store at `address + offset`. */
export function memory<O extends MemoryOperation>(
  name: O,
  offset: number,
  ...operands: NodesOf<(typeof memoryInstructions)[O]['takes']>
): Node<(typeof memoryInstructions)[O]['gives']> {
  const { code, gives, alignment } = memoryInstructions[name];
  return node(name, gives, operands as Node[], { kind: 'memory', code, alignment, offset, lane: null });
}

export function laneMemory<O extends LaneMemoryOperation>(
  name: O,
  offset: number,
  index: number,
  ...operands: NodesOf<(typeof laneMemoryInstructions)[O]['takes']>
): Node<(typeof laneMemoryInstructions)[O]['gives']> {
  const { code, gives, alignment } = laneMemoryInstructions[name];
  return node(name, gives, operands as Node[], { kind: 'memory', code, alignment, offset, lane: index });
}

export const i32 = (value: number): Node<'i32'> => node('i32.const', 'i32', [], { kind: 'i32.const', value });
export const i64 = (value: bigint): Node<'i64'> =>
  node('i64.const', 'i64', [], { kind: 'i64.const', value: BigInt.asIntN(64, value) });
export const f64 = (value: number): Node<'f64'> => node('f64.const', 'f64', [], { kind: 'f64.const', value });
/** Both lanes the same 64 bits. */
export const i64x2 = (value: bigint): Node<'v128'> =>
  node('v128.const', 'v128', [], {
    kind: 'v128.const',
    low: BigInt.asUintN(64, value),
    high: BigInt.asUintN(64, value),
  });
export const f64x2 = (value: number): Node<'v128'> => i64x2(new BigUint64Array(Float64Array.of(value).buffer)[0]!);

export const get = <T extends ValueType>(local: Local<T>): Node<T> =>
  node('local.get', local.type, [], { kind: 'local', action: 'get', local });
export const set = <T extends ValueType>(local: Local<T>, value: Node<T>): Node<'none'> =>
  node('local.set', 'none', [value], { kind: 'local', action: 'set', local });
export const tee = <T extends ValueType>(local: Local<T>, value: Node<T>): Node<T> =>
  node('local.tee', local.type, [value], { kind: 'local', action: 'tee', local });

export const call = <G extends Gives>(target: Callable<G>, ...operands: Node[]): Node<G> =>
  node('call', target.gives, operands, { kind: 'call', target });
/** Calls entry `index` of the module's table with a signature of `takes` → f64. */
export const callIndirect = (takes: readonly ValueType[], operands: Node[], index: Node<'i32'>): Node<'f64'> =>
  node('call_indirect', 'f64', [...operands, index], { kind: 'callIndirect', takes });

export const label = (name: string): Label => ({ name });
export const block = (target: Label, ...body: Node[]): Node<'none'> =>
  node('block', 'none', [], { kind: 'block', label: target, body });
/** A block of any number of statements: more than can be handed over as arguments. */
export const sequence = (name: string, body: readonly Node[]): Node<'none'> =>
  node('block', 'none', [], { kind: 'block', label: label(name), body });
export const loop = (target: Label, ...body: Node[]): Node<'none'> =>
  node('loop', 'none', [], { kind: 'loop', label: target, body });
export const when = (condition: Node<'i32'>, body: Node[], otherwise: Node[] = []): Node<'none'> =>
  node('if', 'none', [condition], { kind: 'if', body, otherwise });
export const branch = (target: Label): Node<'none'> =>
  node('br', 'none', [], { kind: 'branch', label: target, conditional: false });
export const branchIf = (target: Label, condition: Node<'i32'>): Node<'none'> =>
  node('br_if', 'none', [condition], { kind: 'branch', label: target, conditional: true });
export const branchTable = (labels: readonly Label[], fallback: Label, index: Node<'i32'>): Node<'none'> =>
  node('br_table', 'none', [index], { kind: 'branchTable', labels, fallback });
/** `condition` ? `yes` : `no`; both are evaluated. Numbers only, not vectors. */
export const select = <T extends Exclude<ValueType, 'v128'>>(
  yes: Node<T>,
  no: Node<T>,
  condition: Node<'i32'>,
): Node<T> => node('select', yes.gives, [yes, no, condition], { kind: 'select' });
export const giveBack = (...value: Node[]): Node<'none'> => node('return', 'none', value, { kind: 'return' });
export const drop = (value: Node): Node<'none'> => node('drop', 'none', [value], { kind: 'drop' });
