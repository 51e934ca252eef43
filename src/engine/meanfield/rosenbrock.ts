/** The stiff method: a linearly implicit Runge–Kutta step, which solves six sparse systems with one factorisation. */
import { addMultiple } from './add-multiple.ts';
import type { EliminationOrder } from './minimum-degree.ts';
import type { Jacobian, RateEquations } from './rate-equations.ts';
import { couplings, extension, gamma, resultWeights, stageWeights } from './rosenbrock-coefficients.ts';
import { SparseLu } from './sparse-lu.ts';
import type { StepMethod, StepTrouble } from './step-method.ts';

const stages = stageWeights.length;

/**
 * With W = I/(step·γ) − J, stage i solves W·Uᵢ = f(start + Σ aᵢⱼUⱼ) + Σ cᵢⱼUⱼ/step (Hairer & Wanner II, eq. IV.7.25;
 * citation from memory). Every Uᵢ is a combination of f's and of J times earlier ones, so a step keeps linear
 * conserved totals to round-off. A rejected step keeps J and factorises W anew.
 */
export class RosenbrockMethod implements StepMethod {
  readonly name = 'rosenbrock';
  readonly errorOrder = 4;
  readonly operationsPerAttempt: number;
  readonly candidate: Float64Array;
  readonly error: Float64Array;
  readonly derivative: Float64Array;

  readonly #equations: RateEquations;
  readonly #jacobian: Jacobian;
  readonly #factors: SparseLu;
  readonly #matrix: Float64Array;
  readonly #start: Float64Array;
  readonly #stageState: Float64Array;
  readonly #candidateDerivative: Float64Array;
  /** U₁ … U₆. */
  readonly #increments: Float64Array[];

  constructor(equations: RateEquations, jacobian: Jacobian, order: EliminationOrder) {
    const vector = (): Float64Array => new Float64Array(equations.size);
    this.#equations = equations;
    this.#jacobian = jacobian;
    this.#factors = new SparseLu(jacobian.pattern, order.columns);
    this.#matrix = new Float64Array(jacobian.values.length);
    this.#increments = Array.from({ length: stages }, vector);
    [this.candidate, this.derivative, this.#start, this.#stageState] = [vector(), vector(), vector(), vector()];
    this.#candidateDerivative = vector();
    // The last stage is itself the difference between the result and the embedded one.
    this.error = this.#increments[stages - 1]!;
    this.operationsPerAttempt =
      stages * (equations.operations + 10 * equations.size) +
      jacobian.operations +
      6 * jacobian.values.length +
      3 * order.multiplications;
  }

  start(state: Float64Array): number {
    this.#start.set(state);
    const failed = this.#equations.evaluate(state, this.derivative);
    if (failed < 0) this.#equations.evaluateJacobian(state);
    return failed;
  }

  attempt(step: number): StepTrouble | null {
    this.#fillMatrix(1 / (step * gamma));
    if (!this.#factors.factorise(this.#matrix)) return { kind: 'not_solvable' };
    for (let stage = 0; stage < stages; stage++) {
      const increment = this.#increments[stage]!;
      const failed = this.#evaluateStage(stage, increment);
      if (failed >= 0) return { kind: 'rate_not_finite', reaction: failed };
      couplings[stage]!.forEach((coupling, earlier) =>
        addMultiple(increment, coupling / step, this.#increments[earlier]!),
      );
      this.#factors.solve(increment);
    }
    this.#combine(resultWeights, this.candidate);
    if (!this.candidate.every(Number.isFinite)) return { kind: 'not_solvable' };
    const failed = this.#equations.evaluate(this.candidate, this.#candidateDerivative);
    return failed < 0 ? null : { kind: 'rate_not_finite', reaction: failed };
  }

  interpolate(fraction: number, state: Float64Array): void {
    const rest = 1 - fraction;
    for (let i = 0; i < state.length; i++) {
      let [first, second] = [0, 0];
      for (let stage = 0; stage < extension[0].length; stage++) {
        first += extension[0][stage]! * this.#increments[stage]![i]!;
        second += extension[1][stage]! * this.#increments[stage]![i]!;
      }
      state[i] = this.#start[i]! * rest + fraction * (this.candidate[i]! + rest * (first + fraction * second));
    }
  }

  accept(): boolean {
    this.#start.set(this.candidate);
    this.derivative.set(this.#candidateDerivative);
    this.#equations.evaluateJacobian(this.#start);
    return false;
  }

  #fillMatrix(diagonal: number): void {
    const { pattern, values } = this.#jacobian;
    for (let p = 0; p < values.length; p++) this.#matrix[p] = -values[p]!;
    for (const p of pattern.diagonal) this.#matrix[p]! += diagonal;
  }

  #evaluateStage(stage: number, derivative: Float64Array): number {
    if (stage === 0) {
      derivative.set(this.derivative);
      return -1;
    }
    this.#combine(stageWeights[stage]!, this.#stageState);
    return this.#equations.evaluate(this.#stageState, derivative);
  }

  /** start + Σ weight·U. */
  #combine(weights: readonly number[], state: Float64Array): void {
    state.set(this.#start);
    weights.forEach((weight, stage) => addMultiple(state, weight, this.#increments[stage]!));
  }
}
