/** The step selection of tau-leaping as a function of a module: the same operations as engine/leaping/step-selection.ts. */
import { canLeap, criticalBelow } from '../leaping/critical-reactions.ts';
import { boundedSpecies, type OrderForm } from '../leaping/reaction-orders.ts';
import { mostFiringsOfLeap } from '../leaping/tau-leaping.ts';
import type { LeapLayout } from './leap-layout.ts';
import { control, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import { f64, get, giveBack, i32, memory, op, select, set, type Node } from './wasm/node.ts';

const zero = i32(0);
const load = (at: number): Node<'f64'> => memory('f64.load', at, zero);
const store = (at: number, value: Node<'f64'>): Node => memory('f64.store', at, zero, value);
const times = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.mul', a, b);
const plus = (a: Node<'f64'>, b: Node<'f64'>): Node<'f64'> => op('f64.add', a, b);

/** selectStep(): τ'; leaves what leaps and what is critical in their tables, and their totals. */
export function selectStepFunction(
  prepared: PreparedNetwork,
  layout: LeapLayout,
  module: ModuleBuilder,
): FunctionBuilder<'f64'> {
  const { savedState } = structureLayout(prepared);
  const countOf = (species: number): Node<'f64'> => load(savedState + 8 * species);
  const fn = module.function('selectStep', [], 'f64');
  const propensity = fn.local('f64', 'propensity');
  const isCritical = fn.local('i32', 'isCritical');
  const leapingTotal = fn.local('f64', 'leapingTotal');
  const criticalTotal = fn.local('f64', 'criticalTotal');
  const value = fn.local('f64', 'value');
  const length = fn.local('f64', 'length');
  const allowed = fn.local('f64', 'allowed');
  const count = fn.local('f64', 'count');

  prepared.reactions.forEach((reaction, j) => {
    const below = criticalBelow(reaction).map((one) => op('f64.lt', countOf(one.species), f64(one.count)));
    fn.emit(
      set(propensity, load(layout.propensities + 8 * j)),
      set(
        isCritical,
        below.reduce<Node<'i32'>>((any, one) => op('i32.or', any, one), zero),
      ),
      set(value, select(get(propensity), f64(0), get(isCritical))),
      set(criticalTotal, plus(get(criticalTotal), get(value))),
      store(layout.critical + 8 * j, get(value)),
      set(value, canLeap(reaction) ? select(f64(0), get(propensity), get(isCritical)) : f64(0)),
      set(leapingTotal, plus(get(leapingTotal), get(value))),
      store(layout.leaping + 8 * j, get(value)),
    );
  });
  fn.emit(
    store(layout.leapingTotal, get(leapingTotal)),
    store(layout.criticalTotal, get(criticalTotal)),
    set(length, op('f64.div', f64(mostFiringsOfLeap), get(leapingTotal))),
  );
  for (const { species, forms } of boundedSpecies(prepared)) {
    const changes = prepared.reactions.flatMap((reaction, j) =>
      reaction.changes.filter((change) => change.species === species).map((change) => ({ j, count: change.count })),
    );
    const sum = (weight: (change: number) => number): Node<'f64'> =>
      changes
        .map((change) => times(f64(weight(change.count)), load(layout.leaping + 8 * change.j)))
        .reduce((total, term) => plus(total, term));
    const shorten = (other: Node<'f64'>): Node => set(length, op('f64.min', get(length), other));
    fn.emit(
      set(count, countOf(species)),
      set(
        allowed,
        op('f64.max', op('f64.div', times(load(control.epsilon), get(count)), highestOrder(forms, get(count))), f64(1)),
      ),
      shorten(
        op(
          'f64.div',
          get(allowed),
          op(
            'f64.abs',
            sum((change) => change),
          ),
        ),
      ),
      shorten(
        op(
          'f64.div',
          times(get(allowed), get(allowed)),
          sum((change) => change * change),
        ),
      ),
    );
  }
  return fn.emit(giveBack(get(length)));
}

/** g */
function highestOrder(forms: readonly OrderForm[], count: Node<'f64'>): Node<'f64'> {
  return forms
    .map(({ order, count: molecules }): Node<'f64'> => {
      if (molecules === 1) return f64(order);
      let terms: Node<'f64'> = f64(1);
      for (let i = 1; i < molecules; i++) terms = plus(terms, op('f64.div', count, op('f64.sub', count, f64(i))));
      return times(f64(order / molecules), terms);
    })
    .reduce((highest, one) => op('f64.max', highest, one));
}
