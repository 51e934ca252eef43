/** The network as the engine runs it: checked, indexed, with every value a number. Built by `resolve-network.ts`. */
import type { Expression } from './expression.ts';

export interface ResolvedSpecies {
  id: string;
  initialCount: number;
  boundary: boolean;
}

/** `count` items of the species at `species` (an index into `species`). */
export interface Stoichiometry {
  species: number;
  count: number;
}

export type ResolvedLaw =
  /** propensity = constant · Π binomial(count, stoichiometry) over `reactants`. */
  { kind: 'massAction'; constant: Expression } | { kind: 'expression'; expression: Expression };

export interface ResolvedReaction {
  id: string;
  /** What must be present for the reaction to fire, each species once. */
  reactants: Stoichiometry[];
  /** Net change of each non-boundary species per firing; entries of zero are left out. */
  changes: Stoichiometry[];
  law: ResolvedLaw;
}

export interface ResolvedChange {
  id: string;
  when:
    | { kind: 'times'; times: number[] }
    /** Happens whenever `condition` goes from false to true; before time 0 it counts as `before`. */
    | { kind: 'condition'; condition: Expression; before: boolean };
  /**
   * All expressions are evaluated, with the assignments of the network up to date, before any target is set. A count must
   * come out as a whole number from 0 to 2^31 − 1, give or take a few units in the last place of a product; anything
   * else is a failure of the model.
   */
  sets: { target: { kind: 'species' | 'parameter'; index: number }; expression: Expression }[];
}

/**
 * Symbols inside expressions are resolved to `{ kind: 'species' | 'parameter', index }`; a species that means a
 * concentration has become count / compartment size. Compartments and local parameters have been appended to
 * `parameters`, so that overrides change values and never the code made from them.
 */
export interface ResolvedNetwork {
  species: ResolvedSpecies[];
  /** In order: global parameters, compartment sizes, local parameters. */
  parameters: { id: string; value: number }[];
  /** Parameters recomputed from others and from species after each change of state, in dependency order. */
  assignments: { parameter: number; expression: Expression }[];
  reactions: ResolvedReaction[];
  /** What is reported: each species, then each named observable. */
  observables: { id: string; expression: Expression }[];
  /**
   * In document order, which is the order of those at one moment; none when left out. A parameter that one sets keeps its
   * value until the next change, and starts each replicate anew; constants of mass action may depend on it.
   */
  changes?: ResolvedChange[];
}
