/** The steps of the leaping kernel as functions of its module: propensities, Poisson numbers of a leap, the leap and its taking back. */
import type { ExpressionEmitter } from './emit-expression.ts';
import { poissonFunction } from './emit-poisson.ts';
import type { LeapLayout } from './leap-layout.ts';
import { largestCount, largestTotal, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import { each } from './state-functions.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import { call, f64, get, giveBack, i32, memory, op, set, when, type Node } from './wasm/node.ts';

const zero = i32(0);
const load = (at: number): Node<'f64'> => memory('f64.load', at, zero);
const store = (at: number, value: Node<'f64'>): Node => memory('f64.store', at, zero, value);

/** assign(): works out the assigned parameters. */
export function assignFunction(
  prepared: PreparedNetwork,
  layout: LeapLayout,
  module: ModuleBuilder,
  expressionsOf: (fn: FunctionBuilder) => ExpressionEmitter<'scalar'>,
): FunctionBuilder<'none'> {
  const fn = module.function('assign', [], 'none');
  const expressions = expressionsOf(fn as unknown as FunctionBuilder);
  const value = fn.local('f64', 'value');
  prepared.assigned.forEach((term, index) => {
    fn.emit(...expressions.assign(value, term), store(layout.assigned + 8 * index, get(value)));
  });
  return fn;
}

/** propensities(): all of them and their total; answers 1 where one, or the total, is bad. */
export function propensitiesFunction(
  prepared: PreparedNetwork,
  layout: LeapLayout,
  module: ModuleBuilder,
  expressionsOf: (fn: FunctionBuilder) => ExpressionEmitter<'scalar'>,
): FunctionBuilder<'i32'> {
  const fn = module.function('propensities', [], 'i32');
  const expressions = expressionsOf(fn as unknown as FunctionBuilder);
  const value = fn.local('f64', 'propensity');
  const total = fn.local('f64', 'total');
  const bad = fn.local('i32', 'bad');
  prepared.reactions.forEach((reaction, j) => {
    fn.emit(
      ...expressions.assignPropensity(value, reaction),
      store(layout.propensities + 8 * j, get(value)),
      set(bad, op('i32.or', get(bad), op('f64.lt', get(value), f64(0)))),
      set(total, j === 0 ? get(value) : op('f64.add', get(total), get(value))),
    );
  });
  return fn.emit(
    store(layout.total, get(total)),
    giveBack(op('i32.or', get(bad), op('i32.eqz', op('f64.le', get(total), f64(largestTotal))))),
  );
}

/** draw(leap): Poisson numbers of all reactions into the table of firings; answers how many were drawn. */
export function drawFunction(layout: LeapLayout, module: ModuleBuilder): FunctionBuilder<'f64'> {
  const poisson = poissonFunction(module);
  const fn = module.function('draw', [['leap', 'f64']], 'f64');
  const leap = fn.parameter(0, 'f64');
  const at = fn.local('i32', 'at');
  const mean = fn.local('f64', 'mean');
  const firings = fn.local('f64', 'firings');
  const drawn = fn.local('f64', 'drawn');
  return fn.emit(
    each(at, i32(layout.firingsEnd - layout.firings), 8, [
      set(mean, op('f64.mul', memory('f64.load', layout.leaping, get(at)), get(leap))),
      set(firings, f64(0)),
      when(op('f64.gt', get(mean), f64(0)), [
        set(firings, call(poisson, get(mean))),
        set(drawn, op('f64.add', get(drawn), f64(1))),
      ]),
      memory('f64.store', layout.firings, get(at), get(firings)),
    ]),
    giveBack(get(drawn)),
  );
}

export interface LeapFunctions {
  /** leap(): makes all changes of the table of firings, and answers 1; or 0, and makes none, where a count would be out of range. */
  leap: FunctionBuilder<'i32'>;
  /** takeBack(): the state before the last leap. */
  takeBack: FunctionBuilder<'none'>;
}

export function leapFunctions(prepared: PreparedNetwork, layout: LeapLayout, module: ModuleBuilder): LeapFunctions {
  const { savedState } = structureLayout(prepared);
  const changesOf = new Map(prepared.changing.map((species) => [species, [] as { j: number; count: number }[]]));
  prepared.reactions.forEach(({ changes }, j) => {
    for (const { species, count } of changes) changesOf.get(species)!.push({ j, count });
  });
  const leap = module.function('leap', [], 'i32');
  const count = leap.local('f64', 'count');
  const outOfRange = leap.local('i32', 'outOfRange');
  for (const [species, changes] of changesOf) {
    const next = changes.reduce<Node<'f64'>>(
      (sum, change) => op('f64.add', sum, op('f64.mul', f64(change.count), load(layout.firings + 8 * change.j))),
      load(savedState + 8 * species),
    );
    leap.emit(
      set(count, next),
      set(
        outOfRange,
        op(
          'i32.or',
          get(outOfRange),
          op('i32.eqz', op('i32.and', op('f64.ge', get(count), f64(0)), op('f64.le', get(count), f64(largestCount)))),
        ),
      ),
      store(layout.next + 8 * species, get(count)),
    );
  }
  leap.emit(when(get(outOfRange), [giveBack(zero)]));
  const takeBack = module.function('takeBack', [], 'none');
  for (const species of prepared.changing) {
    const [state, next, previous] = [savedState, layout.next, layout.previous].map((table) => table + 8 * species) as [
      number,
      number,
      number,
    ];
    leap.emit(store(previous, load(state)), store(state, load(next)));
    takeBack.emit(store(state, load(previous)));
  }
  leap.emit(giveBack(i32(1)));
  return { leap, takeBack };
}
