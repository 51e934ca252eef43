/**
 * The natural logarithm to about 2⁻⁶⁵ relative, as an unevaluated sum of two doubles: what powers and decimal logarithms rest on.
 *
 * Method: x = 2^k · m, f = m − 1, s = f / (2 + f) with its rounding error by exact products, and
 * ln m = 2s · (1 + z/3 + z²/5 + …), z = s², where 1 + z/3 is carried in two doubles and the rest in one.
 * Source: exact sums and products of Dekker, "A floating-point technique for extending the available precision"
 * (Numer. Math. 1971); the series is the area hyperbolic tangent's.
 */
import { scalarLanes } from '../lanes.ts';
import type { FunctionBuilder } from '../wasm/module-builder.ts';
import { f64, get, i64, op, select, set, type Local, type Node } from '../wasm/node.ts';
import { truncatedFraction } from './double-bits.ts';
import { emitSplitAtRootHalf, splitAtRootHalf } from './logarithm.ts';

export interface Pair {
  high: number;
  low: number;
}

/** ln 2 with 32 low bits of its upper part free, so that k · high is exact for |k| < 2^11. */
const ln2PairHigh = 6.9314718036912381649e-1;
const ln2PairLow = 1.90821492927058770002e-10;
const thirdHigh = 1 / 3;
/** 1/3 − fl(1/3). */
const thirdLow = 1.850371707708594e-17;
/** 1/5, 1/7, …: the area hyperbolic tangent's series; z ≤ 0.0295, so the last term left out is below 2^−66. */
const series = [1 / 5, 1 / 7, 1 / 9, 1 / 11, 1 / 13, 1 / 15, 1 / 17, 1 / 19, 1 / 21, 1 / 23, 1 / 25] as const;

/** a · b exactly, as a sum of two doubles. */
export function exactProduct(a: number, b: number): Pair {
  const high = a * b;
  const aUpper = truncatedFraction(a);
  const bUpper = truncatedFraction(b);
  const aLower = a - aUpper;
  const bLower = b - bUpper;
  return { high, low: aUpper * bUpper - high + aUpper * bLower + aLower * bUpper + aLower * bLower };
}

/** a + b exactly where |a| ≥ |b| or a = 0. */
export function exactSum(a: number, b: number): Pair {
  const high = a + b;
  return { high, low: a - high + b };
}

/** ln(2^exponent · fraction), fraction in [√½, √2). */
export function logarithmPairOfParts(fraction: number, exponent: number): Pair {
  const f = fraction - 1;
  const d = exactSum(2, f);
  const s = f / d.high;
  const product = exactProduct(s, d.high);
  const sLow = (f - product.high - product.low - s * d.low) / d.high;
  const square = exactProduct(s, s);
  const zLow = square.low + 2 * s * sLow;
  const z = square.high;
  let rest: number = series[series.length - 1]!;
  for (let i = series.length - 2; i >= 0; i--) rest = series[i]! + z * rest;
  const third = exactProduct(z, thirdHigh);
  const correction = third.low + (z * thirdLow + zLow * thirdHigh) + z * z * rest;
  const bracket = exactSum(1, third.high);
  const bracketLow = bracket.low + correction;
  const main = exactProduct(s, bracket.high);
  const mainLow = main.low + (s * bracketLow + sLow * bracket.high);
  const scaled = exactSum(exponent * ln2PairHigh, 2 * main.high);
  return exactSum(scaled.high, scaled.low + (exponent * ln2PairLow + 2 * mainLow));
}

/** The same for a positive, finite x, subnormal ones included. */
export function logarithmPair(x: number): Pair {
  const subnormal = x < 2 ** -1022;
  const { fraction, exponent } = splitAtRootHalf(subnormal ? x * 2 ** 54 : x);
  return logarithmPairOfParts(fraction, subnormal ? exponent - 54 : exponent);
}

type Real = Local<'f64'>;
interface LocalPair {
  high: Real;
  low: Real;
}
const add = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.add', a, b);
const minus = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.sub', a, b);
const times = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.mul', a, b);

const emitTruncatedFraction = (x: Node<'f64'>): Node<'f64'> =>
  op('f64.reinterpret_i64', op('i64.and', op('i64.reinterpret_f64', x), i64(~0x7ffffffn)));

export function emitExactProduct(
  fn: FunctionBuilder,
  a: Real,
  bValue: Node<'f64'>,
): { statements: Node[] } & LocalPair {
  const names = ['b', 'aUpper', 'aLower', 'bUpper', 'bLower', 'productHigh', 'productLow'];
  const [b, aUpper, aLower, bUpper, bLower, high, low] = names.map((name) => fn.local('f64', name)) as [
    Real,
    Real,
    Real,
    Real,
    Real,
    Real,
    Real,
  ];
  const error = add(
    add(
      add(minus(times(get(aUpper), get(bUpper)), get(high)), times(get(aUpper), get(bLower))),
      times(get(aLower), get(bUpper)),
    ),
    times(get(aLower), get(bLower)),
  );
  const statements = [
    set(b, bValue),
    set(high, times(get(a), get(b))),
    set(aUpper, emitTruncatedFraction(get(a))),
    set(bUpper, emitTruncatedFraction(get(b))),
    set(aLower, minus(get(a), get(aUpper))),
    set(bLower, minus(get(b), get(bUpper))),
    set(low, error),
  ];
  return { statements, high, low };
}

export function emitExactSum(
  fn: FunctionBuilder,
  aValue: Node<'f64'>,
  bValue: Node<'f64'>,
): { statements: Node[] } & LocalPair {
  const [a, b, high, low] = ['a', 'b', 'sumHigh', 'sumLow'].map((name) => fn.local('f64', name)) as [
    Real,
    Real,
    Real,
    Real,
  ];
  const statements = [
    set(a, aValue),
    set(b, bValue),
    set(high, add(get(a), get(b))),
    set(low, add(minus(get(a), get(high)), get(b))),
  ];
  return { statements, high, low };
}

/** `x` positive and finite; leaves ln x in two locals, operation by operation as `logarithmPair`. `x` is changed. */
export function emitLogarithmPair(fn: FunctionBuilder, x: Real): { statements: Node[] } & LocalPair {
  const shift = fn.local('f64', 'shift');
  const subnormal = fn.local('i32', 'subnormal');
  const statements: Node[] = [
    set(subnormal, op('f64.lt', get(x), f64(2 ** -1022))),
    set(shift, times(op('f64.convert_i32_u', get(subnormal)), f64(54))),
    set(x, select(times(get(x), f64(2 ** 54)), get(x), get(subnormal))),
  ];
  const split = emitSplitAtRootHalf(scalarLanes, fn, get(x));
  statements.push(...split.statements);
  const local = (name: string): Real => fn.local('f64', name);
  const [f, s, sLow, z, zLow, correction, bracketLow, mainLow, k] = [
    'f',
    's',
    'sLow',
    'z',
    'zLow',
    'correction',
    'bracketLow',
    'mainLow',
    'k',
  ].map(local) as [Real, Real, Real, Real, Real, Real, Real, Real, Real];
  const put = (...nodes: Node[]): void => void statements.push(...nodes);
  put(set(k, minus(get(split.exponent), get(shift))), set(f, minus(get(split.fraction), f64(1))));
  const d = emitExactSum(fn, f64(2), get(f));
  put(...d.statements, set(s, op('f64.div', get(f), get(d.high))));
  const product = emitExactProduct(fn, s, get(d.high));
  put(
    ...product.statements,
    set(
      sLow,
      op(
        'f64.div',
        minus(minus(minus(get(f), get(product.high)), get(product.low)), times(get(s), get(d.low))),
        get(d.high),
      ),
    ),
  );
  const square = emitExactProduct(fn, s, get(s));
  put(
    ...square.statements,
    set(zLow, add(get(square.low), times(times(f64(2), get(s)), get(sLow)))),
    set(z, get(square.high)),
  );
  let rest: Node<'f64'> = f64(series[series.length - 1]!);
  for (let i = series.length - 2; i >= 0; i--) rest = add(f64(series[i]!), times(get(z), rest));
  const third = emitExactProduct(fn, z, f64(thirdHigh));
  put(
    ...third.statements,
    set(
      correction,
      add(
        add(get(third.low), add(times(get(z), f64(thirdLow)), times(get(zLow), f64(thirdHigh)))),
        times(times(get(z), get(z)), rest),
      ),
    ),
  );
  const bracket = emitExactSum(fn, f64(1), get(third.high));
  put(...bracket.statements, set(bracketLow, add(get(bracket.low), get(correction))));
  const main = emitExactProduct(fn, s, get(bracket.high));
  put(
    ...main.statements,
    set(mainLow, add(get(main.low), add(times(get(s), get(bracketLow)), times(get(sLow), get(bracket.high))))),
  );
  const scaled = emitExactSum(fn, times(get(k), f64(ln2PairHigh)), times(f64(2), get(main.high)));
  put(...scaled.statements);
  const sum = emitExactSum(
    fn,
    get(scaled.high),
    add(get(scaled.low), add(times(get(k), f64(ln2PairLow)), times(f64(2), get(mainLow)))),
  );
  put(...sum.statements);
  return { statements, high: sum.high, low: sum.low };
}
