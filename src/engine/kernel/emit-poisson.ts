/** Poisson numbers as functions of a module: the same operations in the same order as engine/leaping/poisson*.ts. */
import { leastOfSeries, devianceSeries, stirlingSeries, twoPi } from '../leaping/poisson-probability.ts';
import { leastMeanOfRejection } from '../leaping/poisson-rejection.ts';
import { exponentialFunction } from './elementary/exponential.ts';
import { logarithmFunction } from './elementary/logarithm.ts';
import { emitNext, generatorLocals, onePlusUniform } from './emit-random.ts';
import { scalarLanes as lanes } from './lanes.ts';
import { control } from './memory-layout.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import {
  block,
  branch,
  branchIf,
  call,
  f64,
  get,
  giveBack,
  i32,
  label,
  loop,
  memory,
  op,
  set,
  when,
  type Node,
} from './wasm/node.ts';

const zero = i32(0);
const add = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.add', a, b);
const minus = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.sub', a, b);
const times = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.mul', a, b);
const over = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.div', a, b);

/** uniform(): a 52-bit uniform of the generator in the control block. */
export const uniformFunction = (module: ModuleBuilder): FunctionBuilder<'f64'> =>
  module.shared('uniform', () => {
    const fn = module.function('uniform', [], 'f64');
    const generator = generatorLocals(lanes, fn);
    const place = (word: number): number => control.generator + 8 * word;
    return fn.emit(
      ...generator.state.map((word, i) => set(word, memory('i64.load', place(i), zero))),
      ...emitNext(lanes, generator),
      ...generator.state.map((word, i) => memory('i64.store', place(i), zero, get(word))),
      giveBack(minus(onePlusUniform(lanes, get(generator.output)), f64(1))),
    );
  });

/** poisson(mean) */
export const poissonFunction = (module: ModuleBuilder): FunctionBuilder<'f64'> =>
  module.shared('poisson', () => {
    const inversion = inversionFunction(module);
    const rejection = rejectionFunction(module);
    const fn = module.function('poisson', [['mean', 'f64']], 'f64');
    const mean = fn.parameter(0, 'f64');
    return fn.emit(
      when(op('f64.lt', get(mean), f64(leastMeanOfRejection)), [giveBack(call(inversion, get(mean)))]),
      giveBack(call(rejection, get(mean))),
    );
  });

function inversionFunction(module: ModuleBuilder): FunctionBuilder<'f64'> {
  const exponential = exponentialFunction(module);
  const uniform = uniformFunction(module);
  const fn = module.function('poissonByInversion', [['mean', 'f64']], 'f64');
  const mean = fn.parameter(0, 'f64');
  const drawn = fn.local('f64', 'drawn');
  const firings = fn.local('f64', 'firings');
  const probability = fn.local('f64', 'probability');
  const cumulative = fn.local('f64', 'cumulative');
  const next = fn.local('f64', 'next');
  const again = label('again');
  const found = label('found');
  return fn.emit(
    set(drawn, call(uniform)),
    set(probability, call(exponential, op('f64.neg', get(mean)))),
    set(cumulative, get(probability)),
    block(
      found,
      loop(
        again,
        branchIf(found, op('i32.eqz', op('f64.ge', get(drawn), get(cumulative)))),
        set(firings, add(get(firings), f64(1))),
        set(probability, over(times(get(probability), get(mean)), get(firings))),
        set(next, add(get(cumulative), get(probability))),
        branchIf(found, op('f64.eq', get(next), get(cumulative))),
        set(cumulative, get(next)),
        branch(again),
      ),
    ),
    giveBack(get(firings)),
  );
}

function rejectionFunction(module: ModuleBuilder): FunctionBuilder<'f64'> {
  const logarithm = logarithmFunction(module);
  const uniform = uniformFunction(module);
  const logProbability = logProbabilityFunction(module);
  const fn = module.function('poissonByRejection', [['mean', 'f64']], 'f64');
  const mean = fn.parameter(0, 'f64');
  const [a, b, squeeze, inverseAlpha, u, v, distance, firings] = [
    'a',
    'b',
    'squeeze',
    'inverseAlpha',
    'u',
    'v',
    'distance',
    'firings',
  ].map((name) => fn.local('f64', name)) as [
    typeof mean,
    typeof mean,
    typeof mean,
    typeof mean,
    typeof mean,
    typeof mean,
    typeof mean,
    typeof mean,
  ];
  const again = label('again');
  const height = call(
    logarithm,
    over(times(get(v), get(inverseAlpha)), add(over(get(a), times(get(distance), get(distance))), get(b))),
  );
  return fn.emit(
    set(b, add(f64(0.931), times(f64(2.53), op('f64.sqrt', get(mean))))),
    set(a, add(f64(-0.059), times(f64(0.02483), get(b)))),
    set(squeeze, minus(f64(0.9277), over(f64(3.6224), minus(get(b), f64(2))))),
    set(inverseAlpha, add(f64(1.1239), over(f64(1.1328), minus(get(b), f64(3.4))))),
    loop(
      again,
      set(u, minus(call(uniform), f64(0.5))),
      set(v, call(uniform)),
      set(distance, minus(f64(0.5), op('f64.abs', get(u)))),
      set(
        firings,
        op(
          'f64.floor',
          add(add(times(add(over(times(f64(2), get(a)), get(distance)), get(b)), get(u)), get(mean)), f64(0.43)),
        ),
      ),
      when(op('i32.and', op('f64.ge', get(distance), f64(0.07)), op('f64.le', get(v), get(squeeze))), [
        giveBack(get(firings)),
      ]),
      branchIf(
        again,
        op(
          'i32.or',
          op('f64.lt', get(firings), f64(0)),
          op('i32.and', op('f64.lt', get(distance), f64(0.013)), op('f64.gt', get(v), get(distance))),
        ),
      ),
      branchIf(again, op('i32.eqz', op('f64.le', height, call(logProbability, get(firings), get(mean))))),
    ),
    giveBack(get(firings)),
  );
}

function logProbabilityFunction(module: ModuleBuilder): FunctionBuilder<'f64'> {
  const logarithm = logarithmFunction(module);
  const fn = module.function(
    'logPoissonProbability',
    [
      ['k', 'f64'],
      ['mean', 'f64'],
    ],
    'f64',
  );
  const k = fn.parameter(0, 'f64');
  const mean = fn.parameter(1, 'f64');
  const factorial = fn.local('f64', 'factorial');
  const factor = fn.local('f64', 'factor');
  const square = fn.local('f64', 'square');
  const stirling = fn.local('f64', 'stirling');
  const difference = fn.local('f64', 'difference');
  const v = fn.local('f64', 'v');
  const deviance = fn.local('f64', 'deviance');
  const again = label('again');
  const horner = (coefficients: readonly number[]): Node<'f64'> =>
    coefficients
      .slice(1)
      .reduce<Node<'f64'>>((sum, coefficient) => add(times(sum, get(square)), f64(coefficient)), f64(coefficients[0]!));
  return fn.emit(
    when(op('f64.lt', get(k), f64(leastOfSeries)), [
      set(factorial, f64(1)),
      set(factor, f64(2)),
      loop(
        again,
        when(op('f64.le', get(factor), get(k)), [
          set(factorial, times(get(factorial), get(factor))),
          set(factor, add(get(factor), f64(1))),
          branch(again),
        ]),
      ),
      giveBack(minus(minus(times(get(k), call(logarithm, get(mean))), get(mean)), call(logarithm, get(factorial)))),
    ]),
    set(square, over(f64(1), times(get(k), get(k)))),
    set(stirling, over(horner(stirlingSeries), get(k))),
    set(difference, minus(get(k), get(mean))),
    when(
      op('f64.lt', op('f64.abs', get(difference)), times(f64(0.1), add(get(k), get(mean)))),
      [
        set(v, over(get(difference), add(get(k), get(mean)))),
        set(square, times(get(v), get(v))),
        set(
          deviance,
          add(
            times(get(difference), get(v)),
            times(times(times(f64(2), get(k)), get(v)), times(get(square), horner(devianceSeries))),
          ),
        ),
      ],
      [set(deviance, minus(add(times(get(k), call(logarithm, over(get(k), get(mean)))), get(mean)), get(k)))],
    ),
    giveBack(minus(minus(times(f64(-0.5), call(logarithm, times(f64(twoPi), get(k)))), get(stirling)), get(deviance))),
  );
}
