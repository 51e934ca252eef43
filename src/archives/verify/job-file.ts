/** job.json as `verify` reads it: everything that a repetition needs, checked before it is believed. */
import { z } from 'zod';
import { networkDocument } from '@/contracts/network.ts';
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import { pointsOf } from '@/domain/jobs/sweep.ts';
import { limits } from '@/domain/limits.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';

const whole = (most: number) => z.int().min(0).max(most);

const jobFile = z
  .object({
    format: z.literal('burette-job-1'),
    model: z.object({ contentHash: z.string(), file: z.literal('model.json') }),
    method: z.enum(['exact', 'leap']),
    epsilon: z.number().positive().max(0.5).optional(),
    kernel: z.enum(['direct-scalar', 'direct-simd', 'composition-rejection', 'tau-leaping', 'reference']),
    engineVersion: z.string(),
    seed: z.string().regex(/^\d{1,20}$/),
    horizon: z.number().positive(),
    gridIntervals: whole(limits.gridIntervals).min(1),
    overrides: z.object({
      parameters: z.record(z.string(), z.number()).optional(),
      initialCounts: z.record(z.string(), z.number()).optional(),
      changeTimes: z.record(z.string(), z.number()).optional(),
    }),
    sweep: z
      .object({
        kind: z.enum(['grid', 'list', 'latin_hypercube']),
        targets: z
          .array(z.object({ kind: z.enum(['parameter', 'initial_count', 'change_time']), id: z.string() }))
          .min(1),
        values: z.array(z.array(z.number())).min(1).max(limits.sweepPoints),
      })
      .refine(({ targets, values }) => values.every(({ length }) => length === targets.length), 'a point is ragged')
      .optional(),
    keptTraces: whole(limits.keptTraces),
    passages: z
      .array(z.object({ observable: z.string(), direction: z.enum(['rises_to', 'falls_to']), threshold: z.number() }))
      .max(limits.passagesPerJob),
    correlations: z.array(z.string()).min(2).max(limits.correlatedObservables).optional(),
    eventBudgetPerReplicate: whole(Number.MAX_SAFE_INTEGER),
    points: whole(limits.sweepPoints).min(1),
    replicates: whole(limits.replicatesPerJob).min(1),
    events: whole(Number.MAX_SAFE_INTEGER),
    resultsDigest: z.string(),
  })
  .refine(({ method, epsilon }) => (method === 'leap') === (epsilon !== undefined), {
    path: ['epsilon'],
    message: 'belongs to the method leap, and only to it',
  })
  .refine((job) => job.points === pointsOf(job), 'points are not those of the sweep');

export type JobFile = Omit<z.output<typeof jobFile>, 'overrides' | 'sweep'> & Pick<JobInputs, 'overrides' | 'sweep'>;

type Read<T> = { ok: true; value: T } | { ok: false; problem: string };

export const readJobFile = (text: string): Read<JobFile> => read('job.json', text, jobFile);
export const readModelFile = (text: string): Read<NetworkDocument> => read('model.json', text, networkDocument);

function read<T>(path: string, text: string, schema: z.ZodType<T>): Read<T> {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    return { ok: false, problem: `${path} is not JSON.` };
  }
  const parsed = schema.safeParse(value);
  if (parsed.success) return { ok: true, value: parsed.data };
  const [issue] = parsed.error.issues;
  return { ok: false, problem: `${path} is not what it should be: ${issue!.path.join('.')}: ${issue!.message}.` };
}
