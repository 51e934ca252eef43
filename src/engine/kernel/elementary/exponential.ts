/**
 * The exponential function: once in TypeScript, once as generated code, the same operations in the same order.
 *
 * Method: x = k · ln 2 + r with |r| ≤ ½ ln 2, e^r = 1 + (r·c / (2 − c) − lo + hi) with c = r − r² · P(r²), then scaling by
 * 2^k in two exact steps; error below 1 unit in the last place (half a unit more where the result is subnormal).
 * Source: the freely distributable mathematical library of Sun Microsystems (2004), e_exp.c (coefficients from memory,
 * accuracy checked against the host's function in the tests).
 */
import type { FunctionBuilder, ModuleBuilder } from '../wasm/module-builder.ts';
import { f64, get, giveBack, i64, op, select, set, when, type Node } from '../wasm/node.ts';
import { powerOfTwo } from './double-bits.ts';
import { ln2High, ln2Low } from './logarithm.ts';

const inverseLn2 = 1.442695040888963387;
const p1 = 1.66666666666666019037e-1;
const p2 = -2.77777777770155933842e-3;
const p3 = 6.61375632143793436117e-5;
const p4 = -1.6533902205465251539e-6;
const p5 = 4.13813679705723846039e-8;
/** Above it the result overflows, below the other it rounds to 0. */
export const overflowAbove = 709.782712893383973096;
export const underflowBelow = -745.13321910194110842;

/** e^x. */
export function exponential(x: number): number {
  if (x !== x) return NaN;
  if (x > overflowAbove) return Infinity;
  if (x < underflowBelow) return 0;
  const k = Math.trunc(inverseLn2 * x + (x < 0 ? -0.5 : 0.5));
  const high = x - k * ln2High;
  const low = k * ln2Low;
  const r = high - low;
  const square = r * r;
  const c = r - square * (p1 + square * (p2 + square * (p3 + square * (p4 + square * p5))));
  const y = 1 + ((r * c) / (2 - c) - low + high);
  const half = Math.trunc(k * 0.5);
  return y * powerOfTwo(half) * powerOfTwo(k - half);
}

/** 2^k for a whole double k in the normal range. */
const emitPowerOfTwo = (k: Node<'f64'>): Node<'f64'> =>
  op('f64.reinterpret_i64', op('i64.shl', op('i64.add', op('i64.trunc_sat_f64_s', k), i64(1023n)), i64(52n)));

/** The module's function `exponential`. */
export const exponentialFunction = (module: ModuleBuilder): FunctionBuilder<'f64'> =>
  module.shared('exponential', () => {
    const fn = module.function('exponential', [['x', 'f64']], 'f64');
    const x = fn.parameter(0, 'f64');
    const [k, high, low, r, square, c, half] = ['k', 'high', 'low', 'r', 'square', 'c', 'half'].map((name) =>
      fn.local('f64', name),
    ) as [typeof x, typeof x, typeof x, typeof x, typeof x, typeof x, typeof x];
    const add = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.add', a, b);
    const times = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.mul', a, b);
    const minus = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.sub', a, b);
    const polynomial = [p4, p3, p2, p1].reduce((inner, p) => add(f64(p), times(get(square), inner)), f64(p5));
    const rounding = select(f64(-0.5), f64(0.5), op('f64.lt', get(x), f64(0)));
    const y = add(f64(1), add(minus(op('f64.div', times(get(r), get(c)), minus(f64(2), get(c))), get(low)), get(high)));
    fn.emit(
      when(op('f64.ne', get(x), get(x)), [giveBack(f64(NaN))]),
      when(op('f64.gt', get(x), f64(overflowAbove)), [giveBack(f64(Infinity))]),
      when(op('f64.lt', get(x), f64(underflowBelow)), [giveBack(f64(0))]),
      set(k, op('f64.trunc', add(times(f64(inverseLn2), get(x)), rounding))),
      set(high, minus(get(x), times(get(k), f64(ln2High)))),
      set(low, times(get(k), f64(ln2Low))),
      set(r, minus(get(high), get(low))),
      set(square, times(get(r), get(r))),
      set(c, minus(get(r), times(get(square), polynomial))),
      set(half, op('f64.trunc', times(get(k), f64(0.5)))),
      giveBack(times(times(y, emitPowerOfTwo(get(half))), emitPowerOfTwo(minus(get(k), get(half))))),
    );
    return fn;
  });
