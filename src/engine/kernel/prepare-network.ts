/**
 * Takes everything that no firing can change out of a network into numbered constants, worked out once per point and kept in
 * the kernel's memory, so that one module serves every sweep point.
 */
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedChange, ResolvedNetwork, ResolvedReaction } from '@/domain/network/resolved.ts';
import type { Passage } from '../ensemble.ts';
import { evaluateConstant } from './evaluate.ts';
import {
  largestHoistedOrder,
  type PreparedChange,
  type PreparedNetwork,
  type PreparedReaction,
  type Term,
} from './prepared-network.ts';

class Preparation {
  readonly constants: Expression[] = [];
  readonly assigned: Term[] = [];
  #slots = new Map<string, number>();
  /** What has become of assigned parameters: a term that follows the state, or an expression that stays constant. */
  #assignedTerm = new Map<number, Term>();
  #assignedConstant = new Map<number, Expression>();

  /** Parameters that changes set, by their place in the state. */
  readonly #variables: ReadonlyMap<number, number>;

  constructor(network: ResolvedNetwork, variables: ReadonlyMap<number, number>) {
    this.#variables = variables;
    for (const { parameter, expression } of network.assignments) {
      if (this.#isConstant(expression)) {
        this.#assignedConstant.set(parameter, this.#inlined(expression));
      } else {
        const term = this.term(expression);
        this.#assignedTerm.set(parameter, { kind: 'assigned', index: this.assigned.length });
        this.assigned.push(term);
      }
    }
  }

  #isConstant(expression: Expression): boolean {
    if (expression.kind === 'species') return false;
    if (expression.kind === 'parameter')
      return !this.#assignedTerm.has(expression.index) && !this.#variables.has(expression.index);
    return children(expression).every((child) => this.#isConstant(child));
  }

  /** The constant expression with constant assigned parameters replaced by what they equal. */
  #inlined(expression: Expression): Expression {
    if (expression.kind === 'parameter') return this.#assignedConstant.get(expression.index) ?? expression;
    return mapChildren(expression, (child) => this.#inlined(child));
  }

  #slot(expression: Expression): Term {
    const inlined = this.#inlined(expression);
    if (!mentionsParameter(inlined)) return { kind: 'number', value: evaluateConstant(inlined, []) };
    const key = JSON.stringify(inlined);
    const slot = this.#slots.get(key) ?? this.constants.push(inlined) - 1;
    this.#slots.set(key, slot);
    return { kind: 'constant', slot };
  }

  term(expression: Expression): Term {
    if (expression.kind === 'symbol') throw new Error(`unresolved symbol ${expression.id}`);
    if (this.#isConstant(expression)) return this.#slot(expression);
    switch (expression.kind) {
      case 'species':
        return expression;
      case 'parameter': {
        const place = this.#variables.get(expression.index);
        return place === undefined ? this.#assignedTerm.get(expression.index)! : { kind: 'species', index: place };
      }
      case 'unary':
        return { ...expression, operand: this.term(expression.operand) };
      case 'binary':
        return { ...expression, left: this.term(expression.left), right: this.term(expression.right) };
      case 'call':
        return { ...expression, arguments: expression.arguments.map((argument) => this.term(argument)) };
      case 'piecewise':
        return {
          kind: 'piecewise',
          pieces: expression.pieces.map(({ value, condition }) => ({
            value: this.term(value),
            condition: this.term(condition),
          })),
          otherwise: this.term(expression.otherwise),
        };
      case 'number':
        throw new Error('a number is constant');
    }
  }

  change({ when, sets }: ResolvedChange, held: number | null): PreparedChange {
    return {
      condition: when.kind === 'condition' ? this.term(when.condition) : null,
      held,
      sets: sets.map(({ target, expression }) => ({
        place: target.kind === 'species' ? target.index : this.#variables.get(target.index)!,
        isCount: target.kind === 'species',
        value: this.term(expression),
      })),
    };
  }

  reaction({ reactants, changes, law }: ResolvedReaction): PreparedReaction {
    if (law.kind === 'expression') {
      const guards = reactants.map(({ species, count }) => ({ species, atLeast: count }));
      return { changes, law: { kind: 'expression', value: this.term(law.expression), guards } };
    }
    let divisor = 1;
    for (const { count } of reactants) if (count <= largestHoistedOrder) divisor *= factorial(count);
    const factor: Expression =
      divisor === 1
        ? law.constant
        : { kind: 'binary', operator: 'divide', left: law.constant, right: { kind: 'number', value: divisor } };
    const orders = reactants.map(({ species, count }) => ({ species, order: count }));
    return { changes, law: { kind: 'massAction', factor: this.term(factor), orders } };
  }
}

const factorial = (n: number): number => (n <= 1 ? 1 : n * factorial(n - 1));

function children(expression: Expression): Expression[] {
  switch (expression.kind) {
    case 'unary':
      return [expression.operand];
    case 'binary':
      return [expression.left, expression.right];
    case 'call':
      return expression.arguments;
    case 'piecewise':
      return [...expression.pieces.flatMap(({ value, condition }) => [value, condition]), expression.otherwise];
    default:
      return [];
  }
}

function mapChildren(expression: Expression, change: (child: Expression) => Expression): Expression {
  switch (expression.kind) {
    case 'unary':
      return { ...expression, operand: change(expression.operand) };
    case 'binary':
      return { ...expression, left: change(expression.left), right: change(expression.right) };
    case 'call':
      return { ...expression, arguments: expression.arguments.map(change) };
    case 'piecewise':
      return {
        kind: 'piecewise',
        pieces: expression.pieces.map(({ value, condition }) => ({
          value: change(value),
          condition: change(condition),
        })),
        otherwise: change(expression.otherwise),
      };
    default:
      return expression;
  }
}

const mentionsParameter = (expression: Expression): boolean =>
  expression.kind === 'parameter' || children(expression).some(mentionsParameter);

export function prepareNetwork(network: ResolvedNetwork, passages: readonly Passage[] = []): PreparedNetwork {
  const speciesCount = network.species.length;
  const variables = variablesOf(network);
  const places = new Map(variables.map((parameter, position) => [parameter, speciesCount + position]));
  const preparation = new Preparation(network, places);
  let stateSize = speciesCount + variables.length;
  const changes = (network.changes ?? []).map((change) =>
    preparation.change(change, change.when.kind === 'condition' ? stateSize++ : null),
  );
  const reactions = network.reactions.map((reaction) => preparation.reaction(reaction));
  const countObservables: number[] = [];
  const realObservables: Term[] = [];
  const observablePlaces = network.observables.map(({ expression }): PreparedNetwork['observablePlaces'][number] =>
    expression.kind === 'species'
      ? { kind: 'count', position: countObservables.push(expression.index) - 1 }
      : { kind: 'real', position: realObservables.push(preparation.term(expression)) - 1 },
  );
  const changing = new Set(reactions.flatMap(({ changes }) => changes.map(({ species }) => species)));
  return {
    speciesCount,
    stateSize,
    variables,
    changes,
    passages: passages.map(({ observable, direction, threshold }) => ({
      value: preparation.term(network.observables[observable]!.expression),
      direction,
      threshold,
    })),
    changing: [...changing].sort((a, b) => a - b),
    constants: preparation.constants,
    assigned: preparation.assigned,
    reactions,
    countObservables,
    realObservables,
    observablePlaces,
  };
}

/** The parameters that changes set, each once. */
function variablesOf({ changes = [] }: ResolvedNetwork): number[] {
  const targets = changes.flatMap(({ sets }) => sets.map(({ target }) => target));
  return [...new Set(targets.flatMap(({ kind, index }) => (kind === 'parameter' ? [index] : [])))].sort(
    (a, b) => a - b,
  );
}

/** The values of the constants at a point, in order. */
export function constantValues(prepared: PreparedNetwork, network: ResolvedNetwork): Float64Array {
  const parameters = network.parameters.map(({ value }) => value);
  return Float64Array.from(prepared.constants, (expression) => evaluateConstant(expression, parameters));
}
