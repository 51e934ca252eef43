/** What the adaptive loop asks of a method of integration: one step at a time from a state to a candidate. */

/** Why a step could not be judged; the loop tries a shorter one. */
export type StepTrouble =
  /** A rate was not a finite number at a stage or at the candidate. */
  | { kind: 'rate_not_finite'; reaction: number }
  /** The linear system was singular or the candidate not finite. */
  | { kind: 'not_solvable' };

export interface StepMethod {
  readonly name: 'rosenbrock' | 'explicit';
  /** The local error goes as step^errorOrder. */
  readonly errorOrder: number;
  /** Operations of one attempt, roughly. */
  readonly operationsPerAttempt: number;
  /** The end of the last attempt and the estimate of its local error, by species. */
  readonly candidate: Float64Array;
  readonly error: Float64Array;
  /** Starts from `state`, which stays unchanged until the next `start` or `accept`. Answers a reaction without a finite rate, or −1. */
  start(state: Float64Array): number;
  /** dx/dt at the start, for the choice of a first step. */
  readonly derivative: Float64Array;
  attempt(step: number): StepTrouble | null;
  /** The solution at `fraction` of the last attempt's step, into `state`. */
  interpolate(fraction: number, state: Float64Array): void;
  /** Goes on from the candidate. True when the equations have proved too stiff for this method. */
  accept(): boolean;
}
