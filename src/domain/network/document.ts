/**
 * The reaction network as a person writes it and as a model version stores it.
 *
 * Everything here is plain JSON. Laws and equations are text; `resolve-network.ts` turns the document into the
 * indexed form that the engine runs, and `check-network.ts` says what is wrong with it, where, and how to mend it.
 */

/** An identifier: a letter or underscore, then letters, digits, underscores (SBML's SId). */
export type Identifier = string;

export interface CompartmentDocument {
  id: Identifier;
  name?: string | undefined;
  /** Size in `unit` (litres where none is given); null when unset, which is fine while nothing divides by it. */
  size: number | null;
  unit?: string | undefined;
}

export interface SpeciesDocument {
  id: Identifier;
  name?: string | undefined;
  compartment?: Identifier | undefined;
  /** Molecules (items) at time 0: an integer from 0 to 2^31 − 1. */
  initialCount: number;
  /** A boundary species keeps its count whatever fires. */
  boundary?: boolean | undefined;
  /** What the id means inside expressions: the count itself, or count / compartment size. Default: count. */
  meaning?: 'count' | 'concentration' | undefined;
}

export interface ParameterDocument {
  id: Identifier;
  name?: string | undefined;
  value: number;
  unit?: string | undefined;
}

/** `variable` always equals `expression`: a parameter, or a species that no reaction changes. */
export interface AssignmentRuleDocument {
  variable: Identifier;
  expression: string;
}

export type RateLawDocument =
  /** Propensity = constant · Π (ways of choosing the reactants); `constant` is an expression without species. */
  | { kind: 'massAction'; constant: string }
  /** Propensity = the expression, events per unit time, kept verbatim. */
  | { kind: 'expression'; expression: string };

export interface ReactionDocument {
  id: Identifier;
  name?: string | undefined;
  /** A chemical equation: species, integers, + and an arrow, such as `2 A + B → C` or `∅ -> X`. */
  equation: string;
  rateLaw: RateLawDocument;
  /** Parameters known only inside this reaction's law; they shadow those of the network. */
  localParameters?: ParameterDocument[] | undefined;
}

/** A named quantity to report, computed from species (issue of its own grows this; species are always observables). */
export interface ObservableDocument {
  id: Identifier;
  name?: string | undefined;
  expression: string;
}

export interface NetworkDocument {
  /** Unit of time in words, for axes and captions only: "s", "h", "day". */
  timeUnit?: string | undefined;
  compartments?: CompartmentDocument[] | undefined;
  species: SpeciesDocument[];
  parameters?: ParameterDocument[] | undefined;
  assignmentRules?: AssignmentRuleDocument[] | undefined;
  reactions: ReactionDocument[];
  observables?: ObservableDocument[] | undefined;
}

/** Values that a scenario or sweep point puts in place of the document's own. */
export interface Overrides {
  parameters?: Record<Identifier, number> | undefined;
  initialCounts?: Record<Identifier, number> | undefined;
}

/** One thing found by a check. `path` is a JSON path such as `reactions[2].rateLaw.expression`. */
export interface Problem {
  severity: 'error' | 'warning' | 'information';
  path: string;
  code: string;
  message: string;
}
