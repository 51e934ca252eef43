/** Which species the expressions of a network depend on, directly and through assigned parameters. */
import { leavesOf } from '@/domain/network/expression-leaves.ts';
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';

/** Boundary species are left out: they never move. */
export class Dependencies {
  readonly #isFree: boolean[];
  readonly #ofParameter = new Map<number, ReadonlySet<number>>();
  /** For each species, the indices of the assignments that depend on it, in order. */
  readonly assignmentsOf: number[][];

  constructor(network: ResolvedNetwork) {
    this.#isFree = network.species.map(({ boundary }) => !boundary);
    this.assignmentsOf = network.species.map(() => []);
    network.assignments.forEach(({ parameter, expression }, index) => {
      const species = new Set(this.of(expression));
      this.#ofParameter.set(parameter, species);
      for (const one of species) this.assignmentsOf[one]!.push(index);
    });
  }

  /** The species that `expression` depends on, ascending. */
  of(expression: Expression): number[] {
    const found = new Set<number>();
    for (const leaf of leavesOf(expression)) {
      if (leaf.kind === 'species' && this.#isFree[leaf.index]) found.add(leaf.index);
      if (leaf.kind === 'parameter') for (const one of this.#ofParameter.get(leaf.index) ?? []) found.add(one);
    }
    return [...found].sort((a, b) => a - b);
  }
}

/** Operations of evaluating an expression, roughly. */
export const operationsOf = (expression: Expression): number => 8 * leavesOf(expression).length;
