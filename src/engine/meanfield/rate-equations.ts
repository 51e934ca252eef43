/** The rate equations dx/dt = Σ change · rate of a resolved network, with their sparse Jacobian. */
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { compileExpression, type CompiledExpression, type Values } from './compile-expression.ts';
import { Dependencies, operationsOf } from './dependencies.ts';
import { derivativeAlong, type Direction } from './directional-derivative.ts';
import { expressionRate, massActionRate, type ReactionRate } from './reaction-rate.ts';
import { patternOf, positionOf, type SparsePattern } from './sparse-matrix.ts';

/** A Jacobian that takes more operations than this to evaluate is not worth having. */
const jacobianOperationLimit = 20_000_000;

export interface Jacobian {
  pattern: SparsePattern;
  /** ∂(dxᵢ/dt)/∂xⱼ on the pattern, as last evaluated. */
  values: Float64Array;
  /** Operations of one evaluation, roughly. */
  operations: number;
}

interface Assignment {
  parameter: number;
  expression: Expression;
  compiled: CompiledExpression;
}

export class RateEquations {
  readonly network: ResolvedNetwork;
  readonly size: number;
  /** Operations of one evaluation of dx/dt, roughly. */
  readonly operations: number;
  /** Null when the network is too entangled for one. */
  readonly jacobian: Jacobian | null;

  readonly #values: Values;
  readonly #rates: ReactionRate[];
  readonly #assignments: Assignment[];
  readonly #assignmentsOf: number[][];
  /** ∂assigned parameter/∂species for each species and each of its assignments, as last evaluated. */
  readonly #assignmentSlopes: Float64Array[];
  /** Changes of all reactions in a row: reaction r holds changeStart[r] … changeStart[r + 1] − 1. */
  readonly #changeStart: Int32Array;
  readonly #changeSpecies: Int32Array;
  readonly #changeCount: Float64Array;
  /** Slopes of all rates in a row, and where each product change × slope goes in the Jacobian. */
  readonly #slopeStart: Int32Array;
  readonly #slopes: Float64Array;
  readonly #slots: Int32Array;
  readonly #direction: Direction;

  constructor(network: ResolvedNetwork) {
    const dependencies = new Dependencies(network);
    const { species, reactions, assignments } = network;
    this.network = network;
    this.size = species.length;
    this.#rates = reactions.map((reaction) =>
      reaction.law.kind === 'massAction'
        ? massActionRate(network, reaction.reactants, reaction.law.constant)
        : expressionRate(network, reaction.reactants, reaction.law.expression, dependencies),
    );
    this.#assignments = assignments.map((one) => ({ ...one, compiled: compileExpression(one.expression) }));
    this.#assignmentsOf = dependencies.assignmentsOf;
    this.#assignmentSlopes = this.#assignmentsOf.map((indices) => new Float64Array(indices.length));

    const parameters = Float64Array.from(network.parameters, ({ value }) => value);
    this.#values = { counts: Float64Array.from(species, ({ initialCount }) => initialCount), parameters };
    this.#direction = { ...this.#values, species: -1, parameterSlopes: new Float64Array(parameters.length) };

    const changes = reactions.flatMap((reaction) => reaction.changes);
    this.#changeStart = runningTotals(reactions.map((reaction) => reaction.changes.length));
    this.#changeSpecies = Int32Array.from(changes, (change) => change.species);
    this.#changeCount = Float64Array.from(changes, ({ count }) => count);
    this.#slopeStart = runningTotals(this.#rates.map(({ dependsOn }) => dependsOn.length));
    this.#slopes = new Float64Array(this.#slopeStart.at(-1)!);

    const assigning = assignments.reduce((sum, { expression }) => sum + operationsOf(expression), 0);
    this.operations = this.#rates.reduce((sum, { operations }) => sum + operations, assigning + 2 * changes.length);
    this.jacobian = this.#emptyJacobian();
    this.#slots = this.jacobian === null ? new Int32Array(0) : this.#slotsIn(this.jacobian.pattern);
    this.refresh(parameters);
  }

  /** Takes other values of the parameters, one for each of the network; assigned ones among them are overwritten. */
  refresh(parameters: Float64Array): void {
    this.#values.parameters.set(parameters);
    this.#assign();
    for (const rate of this.#rates) rate.refresh(this.#values.parameters);
  }

  #assign(): void {
    for (const { parameter, compiled } of this.#assignments) {
      this.#values.parameters[parameter] = compiled(this.#values);
    }
  }

  /** Counts (0 in place of less) and parameters at `state`, as laws and observables see them. Overwritten by the next call. */
  valuesAt(state: Float64Array): Values {
    const { counts } = this.#values;
    for (let species = 0; species < this.size; species++) counts[species] = state[species]! <= 0 ? 0 : state[species]!;
    this.#assign();
    return this.#values;
  }

  /** Writes dx/dt at `state` into `derivative`. Answers the first reaction whose rate is not a finite number, or −1. */
  evaluate(state: Float64Array, derivative: Float64Array): number {
    const values = this.valuesAt(state);
    derivative.fill(0);
    for (let reaction = 0; reaction < this.#rates.length; reaction++) {
      const rate = this.#rates[reaction]!.rate(values);
      if (!Number.isFinite(rate)) return reaction;
      for (let p = this.#changeStart[reaction]!; p < this.#changeStart[reaction + 1]!; p++) {
        derivative[this.#changeSpecies[p]!]! += this.#changeCount[p]! * rate;
      }
    }
    return -1;
  }

  /**
   * Fills `jacobian.values` at `state`. Each column is a sum of changes times slopes, so it keeps every conserved total as
   * the equations do. Throws when there is no Jacobian.
   */
  evaluateJacobian(state: Float64Array): void {
    const { values } = this.jacobian!;
    const at = this.valuesAt(state);
    this.#assignmentsOf.forEach((indices, species) => {
      if (indices.length > 0) this.#evaluateAssignmentSlopes(species);
    });
    values.fill(0);
    let slot = 0;
    this.#rates.forEach((rate, reaction) => {
      const offset = this.#slopeStart[reaction]!;
      const end = this.#slopeStart[reaction + 1]!;
      rate.slopes(at, this.#directionOf, this.#slopes, offset);
      for (let p = this.#changeStart[reaction]!; p < this.#changeStart[reaction + 1]!; p++) {
        for (let s = offset; s < end; s++) values[this.#slots[slot++]!]! += this.#changeCount[p]! * this.#slopes[s]!;
      }
    });
  }

  #evaluateAssignmentSlopes(species: number): void {
    this.#assignmentSlopes[species]!.fill(0);
    const direction = this.#directionOf(species);
    this.#assignmentsOf[species]!.forEach((index, place) => {
      const { parameter, expression } = this.#assignments[index]!;
      const { slope } = derivativeAlong(expression, direction);
      this.#assignmentSlopes[species]![place] = slope;
      direction.parameterSlopes[parameter] = slope;
    });
  }

  /** The direction in which one species moves and assigned parameters follow. One object, overwritten by the next call. */
  readonly #directionOf = (species: number): Direction => {
    const direction = this.#direction;
    if (direction.species >= 0) {
      for (const index of this.#assignmentsOf[direction.species]!) {
        direction.parameterSlopes[this.#assignments[index]!.parameter] = 0;
      }
    }
    direction.species = species;
    this.#assignmentsOf[species]!.forEach((index, place) => {
      direction.parameterSlopes[this.#assignments[index]!.parameter] = this.#assignmentSlopes[species]![place]!;
    });
    return direction;
  };

  #emptyJacobian(): Jacobian | null {
    const operations = this.#rates.reduce(
      (sum, rate, reaction) =>
        sum + rate.dependsOn.length * (rate.operations + this.network.reactions[reaction]!.changes.length),
      0,
    );
    if (operations > jacobianOperationLimit) return null;
    const rowsOfColumns = Array.from({ length: this.size }, () => new Set<number>());
    this.#rates.forEach(({ dependsOn }, reaction) => {
      for (const { species } of this.network.reactions[reaction]!.changes) {
        for (const column of dependsOn) rowsOfColumns[column]!.add(species);
      }
    });
    const pattern = patternOf(rowsOfColumns);
    return { pattern, values: new Float64Array(pattern.rows.length), operations };
  }

  #slotsIn(pattern: SparsePattern): Int32Array {
    return Int32Array.from(
      this.#rates.flatMap(({ dependsOn }, reaction) =>
        this.network.reactions[reaction]!.changes.flatMap(({ species }) =>
          dependsOn.map((column) => positionOf(pattern, species, column)),
        ),
      ),
    );
  }
}

function runningTotals(lengths: number[]): Int32Array {
  const totals = new Int32Array(lengths.length + 1);
  lengths.forEach((length, index) => {
    totals[index + 1] = totals[index]! + length;
  });
  return totals;
}
