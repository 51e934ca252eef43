/** The method for networks too entangled for a Jacobian: explicit, needs only rates, and says when they are too stiff for it. */
import { addMultiple } from './add-multiple.ts';
import type { RateEquations } from './rate-equations.ts';
import type { StepMethod, StepTrouble } from './step-method.ts';

/** Dormand & Prince 1980, J. Comput. Appl. Math. 6:19, orders 5 and 4 (citation from memory; the order conditions are tested). */
export const stageWeights = [
  [],
  [1 / 5],
  [3 / 40, 9 / 40],
  [44 / 45, -56 / 15, 32 / 9],
  [19372 / 6561, -25360 / 2187, 64448 / 6561, -212 / 729],
  [9017 / 3168, -355 / 33, 46732 / 5247, 49 / 176, -5103 / 18656],
  [35 / 384, 0, 500 / 1113, 125 / 192, -2187 / 6784, 11 / 84],
] as const;

/** Result of order 5 less result of order 4. */
export const errorWeights = [71 / 57600, 0, -71 / 16695, 71 / 1920, -17253 / 339200, 22 / 525, -1 / 40] as const;

/** The term of order 4 in the continuous extension (Hairer, Nørsett & Wanner I, 2nd ed. 1993, section II.6; from memory). */
export const extension = [
  -12715105075 / 11282082432,
  0,
  87487479700 / 32700410799,
  -10690763975 / 1880347072,
  701980252875 / 199316789632,
  -1453857185 / 822651844,
  69997945 / 29380423,
] as const;

const stages = stageWeights.length;
/**
 * Along the negative axis the method is stable to about 3.3. Steps held back by stability and not by accuracy hover there,
 * so many at 3 and above in a row are the sign of stiffness; a few below it are not enough to clear it.
 */
const stiffFrom = 3;
const stiffStepsInARow = 15;
const easyStepsInARow = 6;

export class ExplicitRungeKuttaMethod implements StepMethod {
  readonly name = 'explicit';
  readonly errorOrder = 5;
  readonly operationsPerAttempt: number;
  readonly candidate: Float64Array;
  readonly error: Float64Array;

  readonly #equations: RateEquations;
  readonly #start: Float64Array;
  readonly #beforeLast: Float64Array;
  readonly #slopes: Float64Array[];
  #step = 0;
  #stiffSteps = 0;
  #easySteps = 0;

  constructor(equations: RateEquations) {
    const vector = (): Float64Array => new Float64Array(equations.size);
    this.#equations = equations;
    this.#slopes = Array.from({ length: stages }, vector);
    [this.candidate, this.error, this.#start, this.#beforeLast] = [vector(), vector(), vector(), vector()];
    this.operationsPerAttempt = stages * (equations.operations + 10 * equations.size);
  }

  get derivative(): Float64Array {
    return this.#slopes[0]!;
  }

  start(state: Float64Array): number {
    this.#start.set(state);
    this.#stiffSteps = 0;
    return this.#equations.evaluate(state, this.derivative);
  }

  attempt(step: number): StepTrouble | null {
    this.#step = step;
    for (let stage = 1; stage < stages; stage++) {
      if (stage === stages - 1) this.#beforeLast.set(this.candidate);
      this.#combine(stageWeights[stage]!, this.candidate);
      const failed = this.#equations.evaluate(this.candidate, this.#slopes[stage]!);
      if (failed >= 0) return { kind: 'rate_not_finite', reaction: failed };
    }
    this.error.fill(0);
    errorWeights.forEach((weight, stage) => addMultiple(this.error, step * weight, this.#slopes[stage]!));
    return this.candidate.every(Number.isFinite) ? null : { kind: 'not_solvable' };
  }

  interpolate(fraction: number, state: Float64Array): void {
    const rest = 1 - fraction;
    const [first, last] = [this.#slopes[0]!, this.#slopes[stages - 1]!];
    for (let i = 0; i < state.length; i++) {
      const difference = this.candidate[i]! - this.#start[i]!;
      const bend = this.#step * first[i]! - difference;
      let fourth = 0;
      for (let stage = 0; stage < stages; stage++) fourth += extension[stage]! * this.#slopes[stage]![i]!;
      const cubic = difference - this.#step * last[i]! - bend;
      const inner = bend + fraction * (cubic + rest * this.#step * fourth);
      state[i] = this.#start[i]! + fraction * (difference + rest * inner);
    }
  }

  /**
   * The quotient of the last two stages estimates the largest eigenvalue (Hairer & Wanner II, section IV.2; from memory): stages
   * 6 and 7 stand at the same time, so their slopes differ only through the states.
   */
  accept(): boolean {
    const [sixth, seventh] = [this.#slopes[stages - 2]!, this.#slopes[stages - 1]!];
    let [slopeSquare, stateSquare] = [0, 0];
    for (let i = 0; i < this.candidate.length; i++) {
      slopeSquare += (seventh[i]! - sixth[i]!) ** 2;
      stateSquare += (this.candidate[i]! - this.#beforeLast[i]!) ** 2;
    }
    const isHeldBack = stateSquare > 0 && this.#step * Math.sqrt(slopeSquare / stateSquare) >= stiffFrom;
    this.#easySteps = isHeldBack ? 0 : this.#easySteps + 1;
    if (isHeldBack) this.#stiffSteps++;
    else if (this.#easySteps >= easyStepsInARow) this.#stiffSteps = 0;
    this.#start.set(this.candidate);
    this.#slopes[0]!.set(seventh);
    return this.#stiffSteps >= stiffStepsInARow;
  }

  #combine(weights: readonly number[], state: Float64Array): void {
    state.set(this.#start);
    weights.forEach((weight, stage) => addMultiple(state, this.#step * weight, this.#slopes[stage]!));
  }
}
