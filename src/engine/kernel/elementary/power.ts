/**
 * Powers: once in TypeScript, once as generated code, the same operations in the same order.
 *
 * A whole exponent from −16 to 16 is worked out by repeated squaring (at most half a unit in the last place per unit of the
 * exponent). Any other goes by x^y = e^(y · ln x) with the logarithm and the product in two doubles (below 2 units).
 * Special cases follow ECMAScript's exponentiation, but for two: a result of zero is always +0 there, and a negative base, −∞
 * included, with an exponent that is not whole gives NaN.
 */
import type { FunctionBuilder, ModuleBuilder } from '../wasm/module-builder.ts';
import {
  branch,
  branchIf,
  call,
  f64,
  get,
  giveBack,
  i32,
  label,
  block,
  loop,
  op,
  select,
  set,
  when,
  type Node,
} from '../wasm/node.ts';
import { exponential, exponentialFunction, overflowAbove, underflowBelow } from './exponential.ts';
import { emitExactProduct, emitLogarithmPair, exactProduct, logarithmPair } from './logarithm-pair.ts';

/** The largest exponent that is worked out by repeated squaring. */
export const largestWholeExponent = 16;

/** x^n for a whole n, 0 ≤ n ≤ 16. */
export function wholePower(x: number, n: number): number {
  let result = 1;
  let square = x;
  for (let left = n; ;) {
    if (left & 1) result *= square;
    left >>= 1;
    if (left === 0) return result;
    square *= square;
  }
}

/** x^y. */
export function power(x: number, y: number): number {
  if (Math.abs(y) <= largestWholeExponent && Math.floor(y) === y)
    return y < 0 ? 1 / wholePower(x, -y) : wholePower(x, y);
  if (x !== x || y !== y) return NaN;
  let sign = 1;
  let base = x;
  if (x < 0) {
    // A double of 2^53 or more is even.
    if (Math.floor(y) !== y) return NaN;
    base = -x;
    if (Math.floor(y * 0.5) !== y * 0.5) sign = -1;
  }
  if (base === 0) return y > 0 ? 0 : sign * Infinity;
  if (base === Infinity) return y > 0 ? sign * Infinity : 0;
  const logarithm = logarithmPair(base);
  const rough = y * logarithm.high;
  if (rough !== rough) return NaN;
  if (rough > overflowAbove + 1) return sign * Infinity;
  if (rough < underflowBelow - 1) return 0;
  const product = exactProduct(y, logarithm.high);
  const low = product.low + y * logarithm.low;
  const main = exponential(product.high);
  return main === Infinity || main === 0 ? sign * main + 0 : sign * (main + main * low);
}

/** x^n with n known when the kernel is made, as straight-line code: the same products as `wholePower`. `x` is used often: a local. */
export function emitWholePower<N>(x: N, n: number, multiply: (a: N, b: N) => N, keep: (value: N) => N): N | null {
  let result: N | null = null;
  let square = x;
  for (let left = n; left > 0; left >>= 1) {
    if (left & 1) result = result === null ? square : keep(multiply(result, square));
    if (left > 1) square = keep(multiply(square, square));
  }
  return result;
}

const times = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.mul', a, b);

/** The module's function `wholePower`: x^n by repeated squaring. */
const wholePowerFunction = (module: ModuleBuilder): FunctionBuilder<'f64'> =>
  module.shared('wholePower', () => {
    const fn = module.function(
      'wholePower',
      [
        ['x', 'f64'],
        ['n', 'i32'],
      ],
      'f64',
    );
    const square = fn.parameter(0, 'f64');
    const left = fn.parameter(1, 'i32');
    const result = fn.local('f64', 'result');
    const again = label('again');
    fn.emit(
      set(result, f64(1)),
      loop(
        again,
        when(op('i32.and', get(left), i32(1)), [set(result, times(get(result), get(square)))]),
        set(left, op('i32.shr_u', get(left), i32(1))),
        when(op('i32.eqz', get(left)), [giveBack(get(result))]),
        set(square, times(get(square), get(square))),
        branch(again),
      ),
      giveBack(get(result)),
    );
    return fn;
  });

/** The module's function `power`. */
export const powerFunction = (module: ModuleBuilder): FunctionBuilder<'f64'> =>
  module.shared('power', () => {
    const whole = wholePowerFunction(module);
    const exponential = exponentialFunction(module);
    const fn = module.function(
      'power',
      [
        ['x', 'f64'],
        ['y', 'f64'],
      ],
      'f64',
    );
    const x = fn.parameter(0, 'f64');
    const y = fn.parameter(1, 'f64');
    const sign = fn.local('f64', 'sign');
    const rough = fn.local('f64', 'rough');
    const low = fn.local('f64', 'low');
    const main = fn.local('f64', 'main');
    const half = (): Node<'f64'> => times(get(y), f64(0.5));
    const isWhole = (value: () => Node<'f64'>): Node<'i32'> => op('f64.eq', op('f64.floor', value()), value());
    const wholeOf = (value: Node<'f64'>): Node<'f64'> => call(whole, get(x), op('i32.trunc_sat_f64_s', value));
    const positive = (): Node<'i32'> => op('f64.gt', get(y), f64(0));
    const infinite = (): Node<'f64'> => times(get(sign), f64(Infinity));
    const general = label('general');
    fn.emit(
      block(
        general,
        branchIf(general, op('i32.eqz', op('f64.le', op('f64.abs', get(y)), f64(largestWholeExponent)))),
        branchIf(
          general,
          op(
            'i32.eqz',
            isWhole(() => get(y)),
          ),
        ),
        when(op('f64.lt', get(y), f64(0)), [giveBack(op('f64.div', f64(1), wholeOf(op('f64.neg', get(y)))))]),
        giveBack(wholeOf(get(y))),
      ),
      when(op('i32.or', op('f64.ne', get(x), get(x)), op('f64.ne', get(y), get(y))), [giveBack(f64(NaN))]),
      set(sign, f64(1)),
      when(op('f64.lt', get(x), f64(0)), [
        when(
          op(
            'i32.eqz',
            isWhole(() => get(y)),
          ),
          [giveBack(f64(NaN))],
        ),
        set(x, op('f64.neg', get(x))),
        when(op('i32.eqz', isWhole(half)), [set(sign, f64(-1))]),
      ]),
      when(op('f64.eq', get(x), f64(0)), [giveBack(select(f64(0), infinite(), positive()))]),
      when(op('f64.eq', get(x), f64(Infinity)), [giveBack(select(infinite(), f64(0), positive()))]),
    );
    const logarithm = emitLogarithmPair(fn, x);
    fn.emit(
      ...logarithm.statements,
      set(rough, times(get(y), get(logarithm.high))),
      when(op('f64.ne', get(rough), get(rough)), [giveBack(f64(NaN))]),
      when(op('f64.gt', get(rough), f64(overflowAbove + 1)), [giveBack(infinite())]),
      when(op('f64.lt', get(rough), f64(underflowBelow - 1)), [giveBack(f64(0))]),
    );
    const product = emitExactProduct(fn, y, get(logarithm.high));
    fn.emit(
      ...product.statements,
      set(low, op('f64.add', get(product.low), times(get(y), get(logarithm.low)))),
      set(main, call(exponential, get(product.high))),
      when(op('i32.or', op('f64.eq', get(main), f64(Infinity)), op('f64.eq', get(main), f64(0))), [
        giveBack(op('f64.add', times(get(sign), get(main)), f64(0))),
      ]),
      giveBack(times(get(sign), op('f64.add', get(main), times(get(main), get(low))))),
    );
    return fn;
  });
