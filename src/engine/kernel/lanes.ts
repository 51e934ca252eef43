/**
 * One vocabulary for code that is generated twice: on single numbers (scalar kernel) and on pairs of lanes (SIMD kernel).
 * What is written against it is the same arithmetic in both, operation by operation, and therefore gives the same bytes.
 */
import { f64, f64x2, i64, i64x2, op, select, type Node } from './wasm/node.ts';

export type Width = 'scalar' | 'vector';
/** A double in each lane. */
export type Real<W extends Width> = W extends 'scalar' ? 'f64' : 'v128';
/** A 64-bit word in each lane. */
export type Word<W extends Width> = W extends 'scalar' ? 'i64' : 'v128';
/** A truth value in each lane: 0 or 1 as i32 (scalar), no bits or all bits (vector). */
export type Truth<W extends Width> = W extends 'scalar' ? 'i32' : 'v128';

type Unary<A extends 'f64' | 'v128' | 'i64' | 'i32'> = (a: Node<A>) => Node<A>;
type Binary<A extends 'f64' | 'v128' | 'i64' | 'i32'> = (a: Node<A>, b: Node<A>) => Node<A>;
type Comparison<W extends Width> = (a: Node<Real<W>>, b: Node<Real<W>>) => Node<Truth<W>>;
type Shift<W extends Width> = (a: Node<Word<W>>, by: number) => Node<Word<W>>;

export interface Lanes<W extends Width> {
  readonly width: W;
  readonly realType: Real<W>;
  readonly wordType: Word<W>;
  real(value: number): Node<Real<W>>;
  add: Binary<Real<W>>;
  subtract: Binary<Real<W>>;
  multiply: Binary<Real<W>>;
  divide: Binary<Real<W>>;
  minimum: Binary<Real<W>>;
  maximum: Binary<Real<W>>;
  negate: Unary<Real<W>>;
  absolute: Unary<Real<W>>;
  squareRoot: Unary<Real<W>>;
  floor: Unary<Real<W>>;
  ceiling: Unary<Real<W>>;
  equal: Comparison<W>;
  notEqual: Comparison<W>;
  less: Comparison<W>;
  lessOrEqual: Comparison<W>;
  both: Binary<Truth<W>>;
  either: Binary<Truth<W>>;
  not: Unary<Truth<W>>;
  /** 1 where true, 0 elsewhere. */
  truthAsReal(truth: Node<Truth<W>>): Node<Real<W>>;
  /** `yes` where true, `no` elsewhere; both are evaluated. */
  choose(truth: Node<Truth<W>>, yes: Node<Real<W>>, no: Node<Real<W>>): Node<Real<W>>;
  /** `value` where true, 0 elsewhere. */
  orZero(truth: Node<Truth<W>>, value: Node<Real<W>>): Node<Real<W>>;
  word(value: bigint): Node<Word<W>>;
  addWords: Binary<Word<W>>;
  andWords: Binary<Word<W>>;
  orWords: Binary<Word<W>>;
  xorWords: Binary<Word<W>>;
  shiftLeft: Shift<W>;
  shiftRight: Shift<W>;
  /** `a` is evaluated twice: pass a local. */
  rotateLeft: Shift<W>;
  wordOf(real: Node<Real<W>>): Node<Word<W>>;
  realOf(word: Node<Word<W>>): Node<Real<W>>;
}

const i32 = (value: number): Node<'i32'> => ({
  name: 'i32.const',
  gives: 'i32',
  operands: [],
  detail: { kind: 'i32.const', value },
});

export const scalarLanes: Lanes<'scalar'> = {
  width: 'scalar',
  realType: 'f64',
  wordType: 'i64',
  real: f64,
  add: (a, b) => op('f64.add', a, b),
  subtract: (a, b) => op('f64.sub', a, b),
  multiply: (a, b) => op('f64.mul', a, b),
  divide: (a, b) => op('f64.div', a, b),
  minimum: (a, b) => op('f64.min', a, b),
  maximum: (a, b) => op('f64.max', a, b),
  negate: (a) => op('f64.neg', a),
  absolute: (a) => op('f64.abs', a),
  squareRoot: (a) => op('f64.sqrt', a),
  floor: (a) => op('f64.floor', a),
  ceiling: (a) => op('f64.ceil', a),
  equal: (a, b) => op('f64.eq', a, b),
  notEqual: (a, b) => op('f64.ne', a, b),
  less: (a, b) => op('f64.lt', a, b),
  lessOrEqual: (a, b) => op('f64.le', a, b),
  both: (a, b) => op('i32.and', a, b),
  either: (a, b) => op('i32.or', a, b),
  not: (a) => op('i32.eqz', a),
  truthAsReal: (truth) => op('f64.convert_i32_u', truth),
  choose: (truth, yes, no) => select(yes, no, truth),
  orZero: (truth, value) => select(value, f64(0), truth),
  word: i64,
  addWords: (a, b) => op('i64.add', a, b),
  andWords: (a, b) => op('i64.and', a, b),
  orWords: (a, b) => op('i64.or', a, b),
  xorWords: (a, b) => op('i64.xor', a, b),
  shiftLeft: (a, by) => op('i64.shl', a, i64(BigInt(by))),
  shiftRight: (a, by) => op('i64.shr_u', a, i64(BigInt(by))),
  rotateLeft: (a, by) => op('i64.rotl', a, i64(BigInt(by))),
  wordOf: (real) => op('i64.reinterpret_f64', real),
  realOf: (word) => op('f64.reinterpret_i64', word),
};

export const vectorLanes: Lanes<'vector'> = {
  width: 'vector',
  realType: 'v128',
  wordType: 'v128',
  real: f64x2,
  add: (a, b) => op('f64x2.add', a, b),
  subtract: (a, b) => op('f64x2.sub', a, b),
  multiply: (a, b) => op('f64x2.mul', a, b),
  divide: (a, b) => op('f64x2.div', a, b),
  minimum: (a, b) => op('f64x2.min', a, b),
  maximum: (a, b) => op('f64x2.max', a, b),
  negate: (a) => op('f64x2.neg', a),
  absolute: (a) => op('f64x2.abs', a),
  squareRoot: (a) => op('f64x2.sqrt', a),
  floor: (a) => op('f64x2.floor', a),
  ceiling: (a) => op('f64x2.ceil', a),
  equal: (a, b) => op('f64x2.eq', a, b),
  notEqual: (a, b) => op('f64x2.ne', a, b),
  less: (a, b) => op('f64x2.lt', a, b),
  lessOrEqual: (a, b) => op('f64x2.le', a, b),
  both: (a, b) => op('v128.and', a, b),
  either: (a, b) => op('v128.or', a, b),
  not: (a) => op('v128.not', a),
  truthAsReal: (truth) => op('v128.and', truth, f64x2(1)),
  choose: (truth, yes, no) => op('v128.bitselect', yes, no, truth),
  orZero: (truth, value) => op('v128.and', truth, value),
  word: i64x2,
  addWords: (a, b) => op('i64x2.add', a, b),
  andWords: (a, b) => op('v128.and', a, b),
  orWords: (a, b) => op('v128.or', a, b),
  xorWords: (a, b) => op('v128.xor', a, b),
  shiftLeft: (a, by) => op('i64x2.shl', a, i32(by)),
  shiftRight: (a, by) => op('i64x2.shr_u', a, i32(by)),
  rotateLeft: (a, by) => op('v128.or', op('i64x2.shl', a, i32(by)), op('i64x2.shr_u', a, i32(64 - by))),
  wordOf: (real) => real,
  realOf: (word) => word,
};
