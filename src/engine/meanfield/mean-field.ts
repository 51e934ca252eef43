/** Solves the rate equations of a network on the grid of a job: the large-count limit of what the ensemble does. */
import { limits } from '@/domain/limits.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { compileExpression } from './compile-expression.ts';
import { ExplicitRungeKuttaMethod } from './explicit-runge-kutta.ts';
import { integrate, type Budget, type IntegrationFailure, type Tolerances } from './integrate.ts';
import { minimumDegreeOrder } from './minimum-degree.ts';
import { RateEquations } from './rate-equations.ts';
import { RosenbrockMethod } from './rosenbrock.ts';
import type { StepMethod } from './step-method.ts';
import { timedChangesOf } from './timed-changes.ts';

export interface MeanFieldOptions {
  network: ResolvedNetwork;
  /** In the network's unit of time; above 0. */
  horizon: number;
  /** Grid time i is i · horizon / gridIntervals, i = 0 … gridIntervals. A whole number from 1 up. */
  gridIntervals: number;
  /** Error allowed per step as a part of each count; 1e−12 to 0.1. Default 1e−6. */
  relativeTolerance?: number;
  /** Error allowed per step in counts beside the relative one; above 0. Default 1e−6. */
  absoluteTolerance?: number;
  /** Changes at set times, simultaneous ones in the order given. Those after the horizon never happen. Default: the network's. */
  timedChanges?: TimedChange[];
  /** Most steps tried, from 1 up. Default 100,000. */
  stepBudget?: number;
  /** Most operations spent, roughly; above 0. Default 3·10⁹, a few seconds on a common machine. */
  operationBudget?: number;
}

export interface TimedChange {
  /** From 0 up. The state at a grid time is that after every change at it. */
  time: number;
  /** Changes counts (by species) or parameters (by parameter; assigned ones are overwritten) in place. */
  apply: (state: { counts: Float64Array; parameters: Float64Array }) => void;
}

export type MeanFieldFailureReason =
  /** An option outside its range, or a change to a count that is negative or no number. */
  | 'invalid_request'
  /** A change that waits for a condition: it would happen to each replicate at another time. */
  | 'triggered_change'
  /** A law has no finite value; `reaction` names it. */
  | 'not_a_number'
  /** The solution runs away in finite time, or a law jumps. */
  | 'step_too_small'
  | 'step_budget'
  | 'work_budget'
  /** Too entangled for the stiff method and too stiff for the explicit one. */
  | 'too_stiff';

export interface MeanFieldSolution {
  ok: true;
  times: number[];
  /** One value per grid time; NaN where an observable has none (0/0). */
  observables: { id: string; values: number[] }[];
  method: StepMethod['name'];
  /** Steps tried, rejected ones included. */
  steps: number;
}

export interface MeanFieldFailure {
  ok: false;
  reason: MeanFieldFailureReason;
  message: string;
  reaction: string | null;
  time: number;
  /** Counts where it stopped. */
  state: Record<string, number>;
}

/** A factorisation above this many multiplications costs more than it saves. */
const multiplicationLimit = 40_000_000;

/**
 * The solution of the rate equations (reaction-rate.ts states their convention) with its error controlled per step: the
 * error at the end is of the size of the tolerances times how strongly the network amplifies early differences. Between
 * steps a continuous extension of order 3 is used. Counts below 0 by less than the tolerance are reported as 0. Where a
 * law is negative the reaction runs backwards here, while the exact method stops. The same input gives the same digits
 * on every machine. Cost per step: one factorisation of the sparse Jacobian and six solves.
 */
export function meanField(options: MeanFieldOptions): MeanFieldSolution | MeanFieldFailure {
  const { network, horizon, gridIntervals } = options;
  const problem = problemWith(options);
  if (problem !== null) return invalid(problem);
  const triggered = network.changes?.find(({ when }) => when.kind === 'condition');
  if (triggered !== undefined) {
    const message = `The change ${triggered.id} waits for a condition, and rate equations do not tell when a replicate meets it.`;
    return { ...invalid(message), reason: 'triggered_change' };
  }

  const equations = new RateEquations(network);
  const method = methodFor(equations);
  const run = new Run(options, equations, method);
  const failure = run.solve();
  if (failure !== null) return failure;
  return {
    ok: true,
    times: Array.from({ length: gridIntervals + 1 }, (_, index) => (index * horizon) / gridIntervals),
    observables: run.observables,
    method: method.name,
    steps: run.stepsTried,
  };
}

function methodFor(equations: RateEquations): StepMethod {
  const { jacobian } = equations;
  const order = jacobian === null ? null : minimumDegreeOrder(jacobian.pattern, multiplicationLimit);
  return jacobian === null || order === null
    ? new ExplicitRungeKuttaMethod(equations)
    : new RosenbrockMethod(equations, jacobian, order);
}

function problemWith(options: MeanFieldOptions): string | null {
  const { network, horizon, gridIntervals, relativeTolerance = 1e-6, absoluteTolerance = 1e-6 } = options;
  if (!(Number.isFinite(horizon) && horizon > 0)) return 'The horizon must be a number above 0.';
  if (!(Number.isInteger(gridIntervals) && gridIntervals >= 1 && gridIntervals <= limits.gridIntervals)) {
    return `The number of grid intervals must be a whole number from 1 to ${limits.gridIntervals}.`;
  }
  if ((gridIntervals + 1) * network.observables.length > limits.resultCells) {
    return `Grid times times observables must not exceed ${limits.resultCells}.`;
  }
  if (!(relativeTolerance >= 1e-12 && relativeTolerance <= 0.1)) {
    return 'The relative tolerance must lie between 1e-12 and 0.1.';
  }
  if (!(absoluteTolerance > 0 && Number.isFinite(absoluteTolerance))) {
    return 'The absolute tolerance must be a number above 0.';
  }
  if (!((options.stepBudget ?? 1) >= 1 && (options.operationBudget ?? 1) > 0)) return 'The budgets must be above 0.';
  if ((options.timedChanges ?? []).some(({ time }) => !(time >= 0))) return 'A change must have a time from 0 up.';
  return null;
}

const invalid = (message: string): MeanFieldFailure => ({
  ok: false,
  reason: 'invalid_request',
  message,
  reaction: null,
  time: 0,
  state: {},
});

/** One solution in the making: the state, the budget left and the grid times filled so far. */
class Run {
  readonly observables: { id: string; values: number[] }[];
  readonly #options: MeanFieldOptions;
  readonly #equations: RateEquations;
  readonly #method: StepMethod;
  readonly #tolerances: Tolerances;
  readonly #budget: Budget;
  readonly #stepBudget: number;
  readonly #compiled: ReturnType<typeof compileExpression>[];
  readonly #state: Float64Array;
  readonly #between: Float64Array;
  readonly #parameters: Float64Array;
  #nextGridIndex = 0;

  constructor(options: MeanFieldOptions, equations: RateEquations, method: StepMethod) {
    const { network } = options;
    this.#options = options;
    this.#equations = equations;
    this.#method = method;
    this.#tolerances = { relative: options.relativeTolerance ?? 1e-6, absolute: options.absoluteTolerance ?? 1e-6 };
    this.#stepBudget = options.stepBudget ?? 100_000;
    this.#budget = { steps: this.#stepBudget, operations: options.operationBudget ?? 3e9 };
    this.#compiled = network.observables.map(({ expression }) => compileExpression(expression));
    this.observables = network.observables.map(({ id }) => ({ id, values: [] }));
    this.#state = Float64Array.from(network.species, ({ initialCount }) => initialCount);
    this.#between = new Float64Array(network.species.length);
    this.#parameters = Float64Array.from(network.parameters, ({ value }) => value);
  }

  get stepsTried(): number {
    return this.#stepBudget - this.#budget.steps;
  }

  /** From change to change, each at its own time; the grid time at a change is recorded after it. */
  solve(): MeanFieldFailure | null {
    const { horizon, timedChanges = timedChangesOf(this.#options.network) } = this.#options;
    const changes = timedChanges.filter(({ time }) => time <= horizon).sort((a, b) => a.time - b.time);
    let time = 0;
    for (const change of changes) {
      const failure = this.#advance(time, change.time) ?? this.#apply(change);
      if (failure !== null) return failure;
      time = change.time;
    }
    const failure = this.#advance(time, horizon);
    if (failure === null) this.#record(horizon, true, () => this.#state);
    return failure;
  }

  #advance(from: number, to: number): MeanFieldFailure | null {
    const failure = integrate({
      method: this.#method,
      state: this.#state,
      from,
      to,
      tolerances: this.#tolerances,
      budget: this.#budget,
      onStep: (start, end) => {
        this.#record(end, false, (gridTime) => {
          this.#method.interpolate((gridTime - start) / (end - start), this.#between);
          return this.#between;
        });
      },
    });
    return failure === null ? null : this.#failureOf(failure);
  }

  #apply({ time, apply }: TimedChange): MeanFieldFailure | null {
    apply({ counts: this.#state, parameters: this.#parameters });
    if (!this.#state.every((count) => count >= 0 && count < Infinity)) {
      return { ...invalid('A change at this time leaves a count that is negative or no number.'), time };
    }
    this.#equations.refresh(this.#parameters);
    return null;
  }

  /** Fills the grid times not yet filled before `end` (up to and at it when `inclusive`). */
  #record(end: number, inclusive: boolean, stateAt: (gridTime: number) => Float64Array): void {
    const { horizon, gridIntervals } = this.#options;
    for (; this.#nextGridIndex <= gridIntervals; this.#nextGridIndex++) {
      const gridTime = (this.#nextGridIndex * horizon) / gridIntervals;
      if (gridTime > end || (gridTime === end && !inclusive)) return;
      const values = this.#equations.valuesAt(stateAt(gridTime));
      this.observables.forEach((observable, index) => observable.values.push(this.#compiled[index]!(values)));
    }
  }

  #failureOf(failure: IntegrationFailure): MeanFieldFailure {
    const { species, reactions } = this.#options.network;
    const reaction = failure.reason === 'not_a_number' ? reactions[failure.reaction]!.id : null;
    return {
      ok: false,
      reason: failure.reason,
      message: messageFor(failure, reaction),
      reaction,
      time: failure.time,
      state: Object.fromEntries(species.map(({ id }, index) => [id, this.#state[index]!])),
    };
  }
}

function messageFor({ reason, time }: IntegrationFailure, reaction: string | null): string {
  switch (reason) {
    case 'not_a_number':
      return `The rate of ${reaction} is not a finite number at time ${time}.`;
    case 'step_too_small':
      return `The rate equations cannot be followed beyond time ${time}: a count runs away or a law jumps there.`;
    case 'step_budget':
      return `The step budget was used up at time ${time}.`;
    case 'work_budget':
      return `The work budget was used up at time ${time}.`;
    case 'too_stiff':
      return `This network is too entangled for the stiff method and too stiff for the explicit one (time ${time}).`;
  }
}
