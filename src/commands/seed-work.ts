/** The demo's models and the jobs that its modellers have run. */
import {
  bistableSwitch,
  demoModels,
  enzyme,
  expressionModel,
  wardOutbreak,
  type DemoModel,
} from '@db/seeds/demo-models.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { createQuote } from '@/server/jobs/create-quote.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { readJob } from '@/server/jobs/read-job.ts';
import { createModel } from '@/server/network/create-model.ts';
import { listModels } from '@/server/network/list-models.ts';
import { saveVersion } from '@/server/network/save-version.ts';
import { must } from './must.ts';

interface DemoJob {
  model: DemoModel;
  name: string;
  /** Index of the modeller who runs it. */
  by: 0 | 1;
  projectCode: string;
  replicates: number;
  horizon: number;
  gridIntervals: number;
  seed: string;
  overrides?: { parameters?: Record<string, number>; initialCounts?: Record<string, number> };
  /** Part of the quote's high estimate that the job may spend; below 1 it stops at its cap. */
  capShare?: number;
}

const demoJobs = (codes: string[]): DemoJob[] => [
  {
    model: enzyme,
    name: 'Droplet conversion in ten minutes',
    by: 0,
    projectCode: codes[0]!,
    replicates: 1500,
    horizon: 600,
    gridIntervals: 120,
    seed: '2612010417',
  },
  {
    model: expressionModel,
    name: 'Reporter spread over four hours',
    by: 1,
    projectCode: codes[0]!,
    replicates: 2000,
    horizon: 240,
    gridIntervals: 120,
    seed: '77120433',
  },
  {
    model: bistableSwitch,
    name: 'Switch retention, 48 h window',
    by: 0,
    projectCode: codes[0]!,
    replicates: 3000,
    horizon: 48,
    gridIntervals: 96,
    seed: '7402118',
  },
  {
    model: wardOutbreak,
    name: 'Outbreak without screening',
    by: 1,
    projectCode: codes[1]!,
    replicates: 20000,
    horizon: 90,
    gridIntervals: 90,
    seed: '118902',
  },
  {
    model: wardOutbreak,
    name: 'Outbreak with screening, capped',
    by: 1,
    projectCode: codes[1]!,
    replicates: 20000,
    horizon: 90,
    gridIntervals: 90,
    seed: '118903',
    overrides: { parameters: { beta: 0.23 } },
    capShare: 0.6,
  },
];

export async function seedWork(options: {
  team: string;
  modellers: [Actor, Actor];
  projectCodes: string[];
}): Promise<void> {
  const { team, modellers } = options;
  const versions = new Map<DemoModel, string>();
  for (const model of demoModels)
    versions.set(
      model,
      must(await createModel({ actor: modellers[0], team, ...model, note: 'First version' })).version.id,
    );
  await reviseWard(team, modellers[1]);
  for (const job of demoJobs(options.projectCodes))
    await runJob({ team, actor: modellers[job.by], job, versionId: versions.get(job.model)! });
}

/** A second version, so that there is a difference to look at. */
async function reviseWard(team: string, actor: Actor): Promise<void> {
  const network = structuredClone(wardOutbreak.network);
  network.parameters!.find(({ id }) => id === 'gamma')!.value = 0.21;
  const { models } = must(await listModels({ actor, team }));
  const { id } = models.find(({ name }) => name === wardOutbreak.name)!;
  must(
    await saveVersion({ actor, team, model: id, network, basedOn: 1, note: 'Recovery from the ward’s own records' }),
  );
}

async function runJob(options: { team: string; actor: Actor; job: DemoJob; versionId: string }): Promise<void> {
  const { team, actor, job, versionId } = options;
  const { replicates, horizon, gridIntervals, seed, overrides } = job;
  const request = {
    modelVersionId: versionId,
    replicates,
    horizon,
    gridIntervals,
    method: 'exact',
    seed,
    lane: 'steady',
    overrides,
  } as const;
  const { quote } = must(await createQuote({ actor, team, request }));
  const cap = job.capShare ? { capMicrocredits: Math.floor(quote.microcredits.high * job.capShare) } : {};
  const launched = must(
    await launchJob({ actor, team, quoteId: quote.id, name: job.name, projectCode: job.projectCode, ...cap }),
  );
  for (;;) {
    const { job: present } = must(await readJob({ actor, team, job: launched.job.id }));
    if (!['queued', 'running'].includes(present.state)) break;
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}
