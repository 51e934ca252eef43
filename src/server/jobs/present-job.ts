/** How jobs look in answers, with the names of what they refer to. */
import { Job } from '@db/models/jobs.ts';
import { ModelVersion, NetworkModel } from '@db/models/models.ts';
import { User } from '@db/models/people.ts';
import { ProjectCode } from '@db/models/teams.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import type { JobInputs } from '@/domain/jobs/job-inputs.ts';
import { pointsOf } from '@/domain/jobs/sweep.ts';
import type { PrecisionTarget } from '@/domain/jobs/precision.ts';
import { isFinal } from '@/domain/jobs/job-state.ts';
import { env } from '../env.ts';

const byId = <T extends { id: string }>(rows: T[]): Map<string, T> => new Map(rows.map((row) => [row.id, row]));

/** In the order given; four queries however many jobs. */
export async function presentJobs(jobs: Job[]): Promise<JobDocument[]> {
  const idsOf = (key: 'userId' | 'modelId' | 'modelVersionId' | 'projectCodeId') => [
    ...new Set(jobs.flatMap((job) => job[key] ?? [])),
  ];
  const [users, models, versions, codes] = await Promise.all([
    User.findAll({ where: { id: idsOf('userId') }, attributes: ['id', 'name'] }).then(byId),
    NetworkModel.findAll({ where: { id: idsOf('modelId') } }).then(byId),
    ModelVersion.findAll({ where: { id: idsOf('modelVersionId') } }).then(byId),
    ProjectCode.findAll({ where: { id: idsOf('projectCodeId') } }).then(byId),
  ]);
  return jobs.map((job) =>
    present(job, {
      user: users.get(job.userId)!,
      model: models.get(job.modelId)!,
      version: versions.get(job.modelVersionId)!,
      code: (job.projectCodeId && codes.get(job.projectCodeId)) || null,
    }),
  );
}

export const presentJob = async (job: Job): Promise<JobDocument> => (await presentJobs([job]))[0]!;

function present(
  job: Job,
  named: { user: User; model: NetworkModel; version: ModelVersion; code: ProjectCode | null },
): JobDocument {
  const { inputs, ending } = job;
  const { document } = named.version;
  const over = isFinal(job.state);
  return {
    id: job.id,
    name: job.name,
    state: job.state,
    phase: job.state !== 'running' ? null : ending ? 'finishing' : 'computing',
    model: {
      id: job.modelId,
      name: named.model.name,
      versionId: job.modelVersionId,
      versionNumber: named.version.number,
    },
    launchedBy: { id: named.user.id, name: named.user.name },
    projectCode: named.code ? { id: named.code.id, code: named.code.code } : null,
    lane: job.lane,
    method: inputs.method,
    epsilon: inputs.epsilon ?? null,
    horizon: inputs.horizon,
    timeUnit: document.timeUnit ?? null,
    gridIntervals: inputs.gridIntervals,
    observables: [...document.species, ...(document.observables ?? [])].map(({ id }) => id),
    overrides: inputs.overrides,
    keptTraces: inputs.keptTraces,
    passages: inputs.passages ?? [],
    stopping: inputs.stopping ? presentTarget(inputs.stopping, inputs) : null,
    points: pointsOf(inputs),
    sweep: inputs.sweep ?? null,
    replicatesPlanned: job.replicatesPlanned,
    replicatesDone: job.replicatesDone,
    events: job.events,
    expectedMicrocredits: job.expectedMicrocredits,
    chargedMicrocredits: job.chargedMicrocredits,
    heldMicrocredits: job.heldMicrocredits,
    capMicrocredits: job.capMicrocredits,
    stopReason: ending?.reason ?? null,
    stopDetail: ending?.detail ?? null,
    failure: ending?.failure ?? null,
    precisionReached: inputs.stopping && over ? ending?.reason === 'precision_reached' : null,
    seed: job.seed,
    kernel: job.kernel ?? null,
    engineVersion: job.engineVersion,
    resultsDigest: job.resultsDigest ?? null,
    archive:
      job.archiveSha256 && job.archiveBytes
        ? { sha256: job.archiveSha256, bytes: job.archiveBytes, revision: job.archiveRevision }
        : null,
    secondsLeft: over ? null : secondsLeft(job),
    createdAt: job.createdAt,
    startedAt: job.startedAt ?? null,
    finishedAt: job.finishedAt ?? null,
  };
}

const presentTarget = (
  { observable, gridPoint, halfWidth }: PrecisionTarget,
  { horizon, gridIntervals }: JobInputs,
): JobDocument['stopping'] => ({
  kind: 'precision',
  observable,
  time: (gridPoint * horizon) / gridIntervals,
  ...halfWidth,
});

/** At the rate seen so far and with all workers; what waits before it is not counted. */
function secondsLeft(job: Job): number | null {
  if (job.secondsPerReplicate <= 0) return null;
  const seconds = ((job.replicatesPlanned - job.replicatesDone) * job.secondsPerReplicate) / env().BURETTE_WORKERS;
  return Math.round(seconds * 10) / 10;
}
