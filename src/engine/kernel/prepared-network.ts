/** The network as code is made from it: built by `prepare-network.ts`. */
import type { BinaryOperator, Expression, FunctionName, UnaryOperator } from '@/domain/network/expression.ts';
import type { Stoichiometry } from '@/domain/network/resolved.ts';

/** What is worked out anew after a firing. */
export type Term =
  | { kind: 'number'; value: number }
  | { kind: 'constant'; slot: number }
  /** Place in the state: a species, or a parameter that changes set. */
  | { kind: 'species'; index: number }
  /** The value of `PreparedNetwork.assigned[index]`. */
  | { kind: 'assigned'; index: number }
  | { kind: 'unary'; operator: UnaryOperator; operand: Term }
  | { kind: 'binary'; operator: BinaryOperator; left: Term; right: Term }
  | { kind: 'call'; name: FunctionName; arguments: Term[] }
  | { kind: 'piecewise'; pieces: { value: Term; condition: Term }[]; otherwise: Term };

export interface PreparedReaction {
  changes: Stoichiometry[];
  law:
    /** factor · Π x(x−1)…(x−order+1), from left to right; the factorials are already in `factor`. */
    | { kind: 'massAction'; factor: Term; orders: { species: number; order: number }[] }
    /** `value` where every guard holds (x ≥ atLeast), else 0. */
    | { kind: 'expression'; value: Term; guards: { species: number; atLeast: number }[] };
}

/** A change of the state that is not a firing. */
export interface PreparedChange {
  /** Null: happens at times, which are the point's and not the code's. Otherwise: whenever this becomes true. */
  condition: Term | null;
  /** Where a triggered change keeps whether its condition held (1 or 0) when last looked at. */
  held: number | null;
  /** All values are worked out before any is put in place. */
  sets: { place: number; isCount: boolean; value: Term }[];
}

export interface PreparedPassage {
  value: Term;
  direction: 'rises_to' | 'falls_to';
  threshold: number;
}

export interface PreparedNetwork {
  speciesCount: number;
  /**
   * Numbers that make up a replicate's state: the counts of the species, then parameters that changes set, then what
   * triggered changes remember. Terms read all of them as `species`, by place.
   */
  stateSize: number;
  /** The parameters that changes set, by place after the species. */
  variables: number[];
  changes: PreparedChange[];
  passages: PreparedPassage[];
  /** Species that some reaction changes; only they can overflow. */
  changing: number[];
  constants: Expression[];
  /** Parameters that follow the state, in dependency order. */
  assigned: Term[];
  reactions: PreparedReaction[];
  /** Observables that are counts of species, by species; then those that are other numbers. */
  countObservables: number[];
  realObservables: Term[];
  /** For each observable of the network: which of the two lists, and where in it. */
  observablePlaces: { kind: 'count' | 'real'; position: number }[];
}

/** Up to this order the factorial is taken into the constant; above it each factor is divided by its own number. */
export const largestHoistedOrder = 10;
