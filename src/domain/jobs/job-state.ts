/** The state machine of a job: which states there are and which step leads from one to another. */
import { accept, refuse, type Result } from '../refusals.ts';

export const jobStates = ['queued', 'running', 'done', 'stopped_at_cap', 'cancelled', 'failed'] as const;
export type JobState = (typeof jobStates)[number];

/** The states in which a job is over: nothing is computed, charged or held for it any more. */
export const finalStates = ['done', 'stopped_at_cap', 'cancelled', 'failed'] as const;
export type FinalState = (typeof finalStates)[number];

const next: Record<JobState, readonly JobState[]> = {
  queued: ['running', 'cancelled', 'failed'],
  running: ['done', 'stopped_at_cap', 'cancelled', 'failed'],
  // More replicates may be added to a sample that ended without a fault of the model.
  done: ['queued'],
  stopped_at_cap: ['queued'],
  cancelled: ['queued'],
  failed: [],
};

export const isFinal = (state: JobState): state is FinalState => finalStates.includes(state as FinalState);

const words: Record<JobState, string> = {
  queued: 'queued',
  running: 'running',
  done: 'done',
  stopped_at_cap: 'stopped at its cap',
  cancelled: 'cancelled',
  failed: 'failed',
};

/** `to` when the step exists; otherwise a refusal that names where the job stands. */
export function stepJob(from: JobState, to: JobState): Result<JobState> {
  if (next[from].includes(to)) return accept(to);
  return isFinal(from)
    ? refuse('job_not_running', `This job is ${words[from]}; it cannot become ${words[to]}.`)
    : refuse('job_not_finished', `This job is ${words[from]}; it cannot become ${words[to]} yet.`);
}
