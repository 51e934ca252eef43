/** The adaptive loop: steps of a length that keeps the estimated local error within the tolerances. */
import { power } from '../kernel/elementary/power.ts';
import type { StepMethod, StepTrouble } from './step-method.ts';

export interface Tolerances {
  relative: number;
  /** In counts. */
  absolute: number;
}

/** What is left to spend; the loop takes from it. Counted, never timed, so that every machine stops at the same place. */
export interface Budget {
  steps: number;
  operations: number;
}

export interface Interval {
  method: StepMethod;
  /** Counts at `from`; those at `to`, or where it had to stop, afterwards. */
  state: Float64Array;
  from: number;
  to: number;
  tolerances: Tolerances;
  budget: Budget;
  /** Called after each accepted step, while `method.interpolate` covers it. */
  onStep: (start: number, end: number) => void;
}

export type IntegrationFailure = { time: number } & (
  | { reason: 'not_a_number'; reaction: number }
  | { reason: 'step_too_small' | 'step_budget' | 'work_budget' | 'too_stiff' }
);

const safety = 0.9;
const leastFactor = 0.2;
const greatestFactor = 6;
const factorAfterTrouble = 0.25;
/** A last step longer than planned by this part is better than two. */
const stretch = 1.001;

/**
 * Integrates from `from` to `to`. The error of a step is the largest |error| / (absolute + relative · |count|) over the
 * species, counted at its larger end; the next step is 0.9 · error^(−1/q) times as long, within 0.2 and 6 (Hairer,
 * Nørsett & Wanner, Solving Ordinary Differential Equations I, 2nd ed. 1993, section II.4; citation from memory).
 * Null when it reached `to`.
 */
export function integrate(interval: Interval): IntegrationFailure | null {
  const { method, state, from, to, tolerances, budget, onStep } = interval;
  const failed = method.start(state);
  if (failed >= 0) return { reason: 'not_a_number', reaction: failed, time: from };
  let time = from;
  let step = firstStep(interval);
  let greatest = greatestFactor;
  let trouble: StepTrouble | null = null;
  while (time < to) {
    const isLast = time + step * stretch >= to;
    if (isLast) step = to - time;
    if (time + step / 8 === time) return tooSmall(time, trouble);
    if (!(budget.steps >= 1)) return { reason: 'step_budget', time };
    if (!(budget.operations >= method.operationsPerAttempt)) return { reason: 'work_budget', time };
    budget.steps -= 1;
    budget.operations -= method.operationsPerAttempt;

    trouble = method.attempt(step);
    const error = trouble === null ? errorOf(method, state, tolerances) : Infinity;
    if (error > 1) {
      step *= trouble === null ? factorFor(error, method.errorOrder, 1) : factorAfterTrouble;
      greatest = 1;
      continue;
    }
    const end = isLast ? to : time + step;
    onStep(time, end);
    time = end;
    state.set(method.candidate);
    const isStiff = method.accept();
    step *= factorFor(error, method.errorOrder, greatest);
    greatest = greatestFactor;
    if (isStiff && !canFinish(method, (to - time) / step, budget)) return { reason: 'too_stiff', time };
  }
  return null;
}

const factorFor = (error: number, order: number, greatest: number): number =>
  Math.min(greatest, Math.max(leastFactor, safety * power(error, -1 / order)));

function errorOf({ candidate, error }: StepMethod, state: Float64Array, { relative, absolute }: Tolerances): number {
  let largest = 0;
  for (let i = 0; i < state.length; i++) {
    const scale = absolute + relative * Math.max(Math.abs(state[i]!), Math.abs(candidate[i]!));
    largest = Math.max(largest, Math.abs(error[i]!) / scale);
  }
  return largest;
}

/** A step over which the start's slope changes no species by more than a hundredth of itself (or of its tolerance). */
function firstStep({ method, state, from, to, tolerances: { relative, absolute } }: Interval): number {
  let [position, speed] = [1, 0];
  for (let i = 0; i < state.length; i++) {
    const scale = absolute + relative * Math.abs(state[i]!);
    position = Math.max(position, Math.abs(state[i]!) / scale);
    speed = Math.max(speed, Math.abs(method.derivative[i]!) / scale);
  }
  return speed === 0 ? to - from : Math.min(to - from, (0.01 * position) / speed);
}

function canFinish({ operationsPerAttempt }: StepMethod, steps: number, budget: Budget): boolean {
  return steps <= budget.steps && steps * operationsPerAttempt <= budget.operations;
}

const tooSmall = (time: number, trouble: StepTrouble | null): IntegrationFailure =>
  trouble?.kind === 'rate_not_finite'
    ? { reason: 'not_a_number', reaction: trouble.reaction, time }
    : { reason: 'step_too_small', time };
