/**
 * The natural logarithm: once in TypeScript, once as generated code, the same operations in the same order.
 *
 * Method: x = 2^k · m with m in [√½, √2), f = m − 1, s = f / (2 + f), and ln(1 + f) = f − f²/2 + s · (f²/2 + R(s²)) with a
 * minimax polynomial R of degree 7 in s²; error below 1 unit in the last place.
 * Source: the freely distributable mathematical library of Sun Microsystems (1993), e_log.c (coefficients from memory,
 * accuracy checked against the host's logarithm in the tests).
 */
import { scalarLanes, type Lanes, type Real, type Width, type Word } from '../lanes.ts';
import type { FunctionBuilder, ModuleBuilder } from '../wasm/module-builder.ts';
import { f64, get, giveBack, op, set, when, type Local, type Node } from '../wasm/node.ts';
import { highWord, withHighWord } from './double-bits.ts';

export const ln2High = 6.9314718036912381649e-1;
export const ln2Low = 1.90821492927058770002e-10;
const coefficients = [
  6.66666666666673513e-1, 3.999999999940941908e-1, 2.857142874366239149e-1, 2.222219843214978396e-1,
  1.818357216161805012e-1, 1.531383769920937332e-1, 1.479819860511658591e-1,
] as const;
const [c1, c2, c3, c4, c5, c6, c7] = coefficients;
/** High word of √½, rounded down. */
const rootHalfHighWord = 0x3fe6a09e;
const oneHighWord = 0x3ff00000;
const least = 2 ** -1022;

/** ln(2^k · m) for m in [√½, √2). */
function logarithmOfParts(m: number, k: number): number {
  const f = m - 1;
  const halfSquare = 0.5 * f * f;
  const s = f / (2 + f);
  const z = s * s;
  const w = z * z;
  const even = w * (c2 + w * (c4 + w * c6));
  const odd = z * (c1 + w * (c3 + w * (c5 + w * c7)));
  const r = odd + even;
  return s * (halfSquare + r) + k * ln2Low - halfSquare + f + k * ln2High;
}

/** x = 2^exponent · fraction with fraction in [√½, √2); x positive, normal and finite. */
export function splitAtRootHalf(x: number): { fraction: number; exponent: number } {
  const shifted = highWord(x) + (oneHighWord - rootHalfHighWord);
  return {
    fraction: withHighWord(x, (shifted & 0xfffff) + rootHalfHighWord),
    exponent: (shifted >>> 20) - 1023,
  };
}

/** ln x; −∞ at 0, NaN below. */
export function logarithm(x: number): number {
  if (!(x >= least)) {
    if (x === 0) return -Infinity;
    if (!(x > 0)) return NaN;
    const { fraction, exponent } = splitAtRootHalf(x * 2 ** 54);
    return logarithmOfParts(fraction, exponent - 54);
  }
  if (x === Infinity) return Infinity;
  const { fraction, exponent } = splitAtRootHalf(x);
  return logarithmOfParts(fraction, exponent);
}

const fractionMask = 0x000fffffffffffffn;
const rootHalfWord = BigInt(rootHalfHighWord) << 32n;
const shiftToRootHalf = BigInt(oneHighWord - rootHalfHighWord) << 32n;
/** 2^52 as bits: or-ing an integer below 2^52 into it makes the double 2^52 + integer. */
const integerMagic = 0x4330000000000000n;

/**
 * Statements that leave fraction and exponent of `x` (positive, normal, finite) in two locals, in either width.
 * The exponent is a double.
 */
export function emitSplitAtRootHalf<W extends Width>(
  lanes: Lanes<W>,
  fn: FunctionBuilder,
  x: Node<Real<W>>,
): { statements: Node[]; fraction: Local<Real<W>>; exponent: Local<Real<W>> } {
  const shifted = fn.local(lanes.wordType, 'shifted') as Local<Word<W>>;
  const fraction = fn.local(lanes.realType, 'fraction') as Local<Real<W>>;
  const exponent = fn.local(lanes.realType, 'exponent') as Local<Real<W>>;
  const statements = [
    set(shifted, lanes.addWords(lanes.wordOf(x), lanes.word(shiftToRootHalf))),
    set(
      fraction,
      lanes.realOf(lanes.addWords(lanes.andWords(get(shifted), lanes.word(fractionMask)), lanes.word(rootHalfWord))),
    ),
    set(
      exponent,
      lanes.subtract(
        lanes.realOf(lanes.orWords(lanes.shiftRight(get(shifted), 52), lanes.word(integerMagic))),
        lanes.real(2 ** 52 + 1023),
      ),
    ),
  ];
  return { statements, fraction, exponent };
}

/** Statements and a value: ln(2^exponent · fraction), as `logarithmOfParts`, in either width. */
export function emitLogarithmOfParts<W extends Width>(
  lanes: Lanes<W>,
  fn: FunctionBuilder,
  fraction: Local<Real<W>>,
  exponent: Local<Real<W>>,
): { statements: Node[]; value: Node<Real<W>> } {
  const { add, subtract, multiply, divide, real } = lanes;
  const local = (name: string): Local<Real<W>> => fn.local(lanes.realType, name) as Local<Real<W>>;
  const f = local('f');
  const halfSquare = local('halfSquare');
  const s = local('s');
  const z = local('z');
  const w = local('w');
  const even = local('even');
  /** c[0] + w · (c[1] + w · (…)) */
  const horner = (...c: number[]): Node<Real<W>> => {
    const [first, ...rest] = c;
    return rest.length === 0 ? real(first!) : add(real(first!), multiply(get(w), horner(...rest)));
  };
  const statements = [
    set(f, subtract(get(fraction), real(1))),
    set(halfSquare, multiply(multiply(real(0.5), get(f)), get(f))),
    set(s, divide(get(f), add(real(2), get(f)))),
    set(z, multiply(get(s), get(s))),
    set(w, multiply(get(z), get(z))),
    set(even, multiply(get(w), horner(c2, c4, c6))),
  ];
  const r = add(multiply(get(z), horner(c1, c3, c5, c7)), get(even));
  const tail = multiply(get(s), add(get(halfSquare), r));
  const lower = subtract(add(tail, multiply(get(exponent), real(ln2Low))), get(halfSquare));
  return { statements, value: add(add(lower, get(f)), multiply(get(exponent), real(ln2High))) };
}

/** Statements and a value: ln of `x`, which must be positive, normal and finite. In either width. */
export function emitLogarithmOfNormal<W extends Width>(
  lanes: Lanes<W>,
  fn: FunctionBuilder,
  x: Node<Real<W>>,
): { statements: Node[]; value: Node<Real<W>> } {
  const { statements, fraction, exponent } = emitSplitAtRootHalf(lanes, fn, x);
  const parts = emitLogarithmOfParts(lanes, fn, fraction, exponent);
  return { statements: [...statements, ...parts.statements], value: parts.value };
}

/** The module's function `logarithm`: the same as the TypeScript one above. */
export const logarithmFunction = (module: ModuleBuilder): FunctionBuilder<'f64'> =>
  module.shared('logarithm', () => {
    const fn = module.function('logarithm', [['x', 'f64']], 'f64');
    const x = fn.parameter(0, 'f64');
    const shift = fn.local('f64', 'shift');
    fn.emit(
      when(op('i32.eqz', op('f64.ge', get(x), f64(least))), [
        when(op('f64.eq', get(x), f64(0)), [giveBack(f64(-Infinity))]),
        when(op('i32.eqz', op('f64.gt', get(x), f64(0))), [giveBack(f64(NaN))]),
        set(shift, f64(54)),
        set(x, op('f64.mul', get(x), f64(2 ** 54))),
      ]),
      when(op('f64.eq', get(x), f64(Infinity)), [giveBack(f64(Infinity))]),
    );
    const { statements, fraction, exponent } = emitSplitAtRootHalf(scalarLanes, fn, get(x));
    const parts = emitLogarithmOfParts(scalarLanes, fn, fraction, exponent);
    fn.emit(
      ...statements,
      set(exponent, op('f64.sub', get(exponent), get(shift))),
      ...parts.statements,
      giveBack(parts.value),
    );
    return fn;
  });
