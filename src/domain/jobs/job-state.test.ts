import { describe, expect, it } from 'vitest';
import { isFinal, jobStates, stepJob } from './job-state.ts';

const allowed = new Set([
  'queued running',
  'queued cancelled',
  'queued failed',
  'running done',
  'running stopped_at_cap',
  'running cancelled',
  'running failed',
  'done queued',
  'stopped_at_cap queued',
  'cancelled queued',
]);

describe('stepJob', () => {
  it('takes the steps of the table and refuses every other one with where the job stands', () => {
    for (const from of jobStates)
      for (const to of jobStates) {
        const step = stepJob(from, to);
        expect([`${from} ${to}`, step.ok]).toEqual([`${from} ${to}`, allowed.has(`${from} ${to}`)]);
        if (!step.ok) expect(step.code).toBe(isFinal(from) ? 'job_not_running' : 'job_not_finished');
      }
  });
});
