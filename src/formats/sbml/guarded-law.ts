/** The guard that a reaction does not fire without its reactants, written into a law for programs that do not have it. */
import type { Expression } from '@/domain/network/expression.ts';
import { printExpression } from '@/domain/network/print-expression.ts';

/** What a reaction takes of a species, and the count of that species as an expression. */
export interface Need {
  count: number;
  amount: Expression;
}

const binary = (operator: 'multiply' | 'greaterOrEqual' | 'and', left: Expression, right: Expression): Expression => ({
  kind: 'binary',
  operator,
  left,
  right,
});

/** The count of a species in terms of its id: the id itself, or concentration · size. */
export function amountOf(species: string, size: string | null): Expression {
  const symbol: Expression = { kind: 'symbol', id: species };
  return size === null ? symbol : binary('multiply', symbol, { kind: 'symbol', id: size });
}

/** piecewise(law, every reactant is there, 0). At least one need. */
export function guardedLaw(law: Expression, needs: Need[]): Expression {
  const condition = needs
    .map(({ count, amount }) => binary('greaterOrEqual', amount, { kind: 'number', value: count }))
    .reduce((left, right) => binary('and', left, right));
  return { kind: 'piecewise', pieces: [{ value: law, condition }], otherwise: { kind: 'number', value: 0 } };
}

/** The law inside a guard for exactly these needs, or the law as it is. */
export function withoutGuard(law: Expression, needs: Need[]): Expression {
  const inner = law.kind === 'piecewise' ? law.pieces[0]?.value : undefined;
  if (inner === undefined || needs.length === 0) return law;
  return printExpression(guardedLaw(inner, needs)) === printExpression(law) ? inner : law;
}
