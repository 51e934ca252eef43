/** The decimal logarithm, from the natural one in two doubles, so that whole powers of ten come out whole. */
import type { FunctionBuilder, ModuleBuilder } from '../wasm/module-builder.ts';
import { f64, get, giveBack, op, when, type Node } from '../wasm/node.ts';
import { emitExactProduct, emitLogarithmPair, exactProduct, logarithmPair } from './logarithm-pair.ts';

/** 1 / ln 10 as a sum of two doubles. */
const inverseLn10High = 0.4342944819032518;
const inverseLn10Low = 1.098319650216765e-17;

/** log₁₀ x; −∞ at 0, NaN below. */
export function decimalLogarithm(x: number): number {
  if (x === 0) return -Infinity;
  if (!(x > 0)) return NaN;
  if (x === Infinity) return Infinity;
  const natural = logarithmPair(x);
  const product = exactProduct(natural.high, inverseLn10High);
  return product.high + (product.low + (natural.high * inverseLn10Low + natural.low * inverseLn10High));
}

/** The module's function `decimalLogarithm`. */
export const decimalLogarithmFunction = (module: ModuleBuilder): FunctionBuilder<'f64'> =>
  module.shared('decimalLogarithm', () => {
    const fn = module.function('decimalLogarithm', [['x', 'f64']], 'f64');
    const x = fn.parameter(0, 'f64');
    const times = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.mul', a, b);
    fn.emit(
      when(op('f64.eq', get(x), f64(0)), [giveBack(f64(-Infinity))]),
      when(op('i32.eqz', op('f64.gt', get(x), f64(0))), [giveBack(f64(NaN))]),
      when(op('f64.eq', get(x), f64(Infinity)), [giveBack(f64(Infinity))]),
    );
    const natural = emitLogarithmPair(fn, x);
    const product = emitExactProduct(fn, natural.high, f64(inverseLn10High));
    const small = op(
      'f64.add',
      times(get(natural.high), f64(inverseLn10Low)),
      times(get(natural.low), f64(inverseLn10High)),
    );
    fn.emit(
      ...natural.statements,
      ...product.statements,
      giveBack(op('f64.add', get(product.high), op('f64.add', get(product.low), small))),
    );
    return fn;
  });
