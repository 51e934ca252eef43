/** One number of a sweep at every one of its points. */
import { z } from 'zod';
import { contract } from './contract.ts';
import { sweepDocument } from './jobs.ts';

export const sweepStatistics = ['mean', 'sd', 'fano', 'cv', 'passed'] as const;

export const sweepResultsDocument = z.object({
  /** At each point. */
  replicates: z.number().int(),
  statistic: z.enum(sweepStatistics),
  sweep: sweepDocument,
  /** By point, with the 95 % interval: mean ± 1.96 standard errors, of a probability the score interval (Wilson). Null: cannot be given. */
  values: z.array(
    z.object({ value: z.number(), lower: z.number().nullable(), upper: z.number().nullable() }).nullable(),
  ),
});
export type SweepResultsDocument = z.infer<typeof sweepResultsDocument>;

export const readSweep = contract({
  id: 'readSweep',
  feature: 'jobs',
  method: 'GET',
  path: '/api/v1/teams/{team}/jobs/{job}/sweep',
  summary: 'One statistic of an observable, or the probability of a first passage, at every point of a sweep',
  access: { kind: 'team', permission: 'results:read' },
  query: z.object({
    statistic: z.enum(sweepStatistics).default('mean'),
    /** Needed but for `passed`. */
    observable: z.string().min(1).max(100).optional(),
    /** Default: the horizon. The grid time nearest to it is taken. */
    time: z.coerce.number().min(0).optional(),
    /** Which of the job's first passages, for `passed`: by the horizon. */
    passage: z.coerce.number().int().min(0).default(0),
  }),
  answers: [{ status: 200, description: 'By point', schema: sweepResultsDocument }],
  refusals: ['not_signed_in', 'not_found', 'forbidden', 'invalid_input', 'results_not_ready'],
});
