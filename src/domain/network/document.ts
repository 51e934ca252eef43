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

/** When a change happens. Times are in the network's unit of time, from 0 up. */
export type ChangeMoment =
  /**
   * At `time`, and then `times` times in all, `every` apart (once when these are left out). `time` and `every` are
   * expressions of parameters and compartments, so that scenarios can move a dose.
   */
  | { kind: 'time'; time: string; every?: string | undefined; times?: number | undefined }
  /**
   * Whenever `condition` becomes true: looked at after each firing and each change. Where it holds at time 0 already,
   * `happensAtStart` says whether that counts as becoming true (default: no).
   */
  | { kind: 'condition'; condition: string; happensAtStart?: boolean | undefined };

/**
 * Sets counts or parameters at a time or on a condition: a dose, a wash-out, a switch. All expressions of a change are
 * worked out before any is put in place. Changes at one moment happen one after the other in the document's order.
 * Screens say “timed change” and “triggered change”, never “event”, which is a firing.
 */
export interface ChangeDocument {
  id: Identifier;
  name?: string | undefined;
  when: ChangeMoment;
  /** Species (in what their id means: count or concentration) and parameters; none that a rule sets. At least one. */
  assignments: { variable: Identifier; expression: string }[];
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
  changes?: ChangeDocument[] | undefined;
}

/** Values that a scenario or sweep point puts in place of the document's own. */
export interface Overrides {
  parameters?: Record<Identifier, number> | undefined;
  initialCounts?: Record<Identifier, number> | undefined;
  /** When timed changes first happen, by their ids. */
  changeTimes?: Record<Identifier, number> | undefined;
}

/** One thing found by a check. `path` is a JSON path such as `reactions[2].rateLaw.expression`. */
export interface Problem {
  severity: 'error' | 'warning' | 'information';
  path: string;
  code: string;
  message: string;
}
