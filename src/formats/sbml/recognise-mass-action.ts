/**
 * Recognises a kinetic law as mass action only where the two are the same for every count: c·x, c·x·y, c·x·(x − 1)/2 …
 * A law such as k·x² of 2 X is another process and stays as it is.
 */
import type { Expression } from '@/domain/network/expression.ts';
import { symbolsOf } from '@/domain/network/expression-leaves.ts';
import { printExpression } from '@/domain/network/print-expression.ts';

export interface LawContext {
  reactants: { species: string; count: number }[];
  /** The size symbol of a species whose id means a concentration; null or undefined for every other name. */
  sizeOf: (id: string) => string | null | undefined;
  /** Whether a name stands for, or depends on, something that changes during a run. */
  changes: (id: string) => boolean;
}

/** A product over a product, each factor printed for comparison. */
interface Quotient {
  above: Expression[];
  below: Expression[];
}

/**
 * The constant c with law = c · Π (ways of choosing the reactants), or null when the law is anything else. Concentrations
 * count as count / size, and equal factors above and below cancel: V·k·[A]·[B] of A + B gives k / V.
 */
export function recogniseMassAction(law: Expression, context: LawContext): Expression | null {
  const quotient = cancelled(factorsOf(law, context));
  for (const { species, count } of context.reactants) {
    for (let taken = 0; taken < count; taken++) {
      if (!removeFirst(quotient.above, (factor) => isCountLess(factor, species, taken, context))) return null;
    }
    const orders = factorial(count);
    if (orders > 1 && !removeDivisor(quotient.below, orders)) return null;
  }
  const left = [...quotient.above, ...quotient.below];
  if (left.some((factor) => [...symbolsOf(factor)].some((id) => context.changes(id)))) return null;
  const above = product(quotient.above.filter((factor) => !isNumber(factor, 1)));
  return quotient.below.length === 0
    ? above
    : { kind: 'binary', operator: 'divide', left: above, right: product(quotient.below) };
}

const isNumber = (factor: Expression, value: number): boolean => factor.kind === 'number' && factor.value === value;

function factorial(count: number): number {
  let result = 1;
  for (let factor = 2; factor <= count; factor++) result *= factor;
  return result;
}

function factorsOf(expression: Expression, context: LawContext): Quotient {
  if (expression.kind === 'binary' && (expression.operator === 'multiply' || expression.operator === 'divide')) {
    const left = factorsOf(expression.left, context);
    const right = factorsOf(expression.right, context);
    const [above, below] = expression.operator === 'multiply' ? [right.above, right.below] : [right.below, right.above];
    return { above: [...left.above, ...above], below: [...left.below, ...below] };
  }
  if (expression.kind === 'symbol') {
    const size = context.sizeOf(expression.id);
    if (typeof size === 'string') return { above: [expression], below: [{ kind: 'symbol', id: size }] };
  }
  return { above: [expression], below: [] };
}

function cancelled({ above, below }: Quotient): Quotient {
  const remaining = new Map<string, number>();
  for (const factor of below) bump(remaining, printExpression(factor), 1);
  const keptAbove = above.filter((factor) => {
    const text = printExpression(factor);
    if ((remaining.get(text) ?? 0) === 0) return true;
    bump(remaining, text, -1);
    return false;
  });
  const keptBelow = below.filter((factor) => {
    const text = printExpression(factor);
    if ((remaining.get(text) ?? 0) === 0) return false;
    bump(remaining, text, -1);
    return true;
  });
  return { above: keptAbove, below: keptBelow };
}

const bump = (counts: Map<string, number>, key: string, by: number): void => {
  counts.set(key, (counts.get(key) ?? 0) + by);
};

/** Whether `factor` is the count of `species` less `taken` (a whole number). */
function isCountLess(factor: Expression, species: string, taken: number, context: LawContext): boolean {
  if (taken === 0) return factor.kind === 'symbol' && factor.id === species;
  if (factor.kind !== 'binary' || factor.operator !== 'subtract' || !isNumber(factor.right, taken)) return false;
  const { above, below } = cancelled(factorsOf(factor.left, context));
  const [only, second] = above.filter((part) => !isNumber(part, 1));
  return below.length === 0 && second === undefined && only?.kind === 'symbol' && only.id === species;
}

function removeFirst(factors: Expression[], matches: (factor: Expression) => boolean): boolean {
  const index = factors.findIndex(matches);
  if (index >= 0) factors.splice(index, 1);
  return index >= 0;
}

/** Takes the number `divisor` out of the product below: as it stands, or out of a whole multiple of it. */
function removeDivisor(below: Expression[], divisor: number): boolean {
  const exact = below.findIndex((factor) => isNumber(factor, divisor));
  const multiple = below.findIndex(
    (factor) => factor.kind === 'number' && factor.value % divisor === 0 && factor.value !== 0,
  );
  const index = exact >= 0 ? exact : multiple;
  const factor = below[index];
  if (factor?.kind !== 'number') return false;
  if (factor.value === divisor) below.splice(index, 1);
  else below[index] = { kind: 'number', value: factor.value / divisor };
  return true;
}

function product(factors: Expression[]): Expression {
  const [first, ...rest] = factors;
  if (first === undefined) return { kind: 'number', value: 1 };
  return rest.reduce((left, right): Expression => ({ kind: 'binary', operator: 'multiply', left, right }), first);
}
