/** Launches a quoted job in one transaction: checks quote, cap and balance, holds the cap, writes the plan. */
import { Op } from 'sequelize';
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { Job } from '@db/models/jobs.ts';
import { ModelVersion } from '@db/models/models.ts';
import { ProjectCode } from '@db/models/teams.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { engineVersion } from '@/engine/engine-version.ts';
import { nowText } from '../clock.ts';
import { checkNothingOwed } from '../billing/check-nothing-owed.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import { announceJobChange, wakeDispatcher } from './job-changes.ts';
import { capOf, checkOpenJobs, findOpenQuote, openSegment } from './open-segment.ts';
import { presentJob } from './present-job.ts';

export async function launchJob(options: {
  actor: Actor;
  team: string;
  quoteId: string;
  name: string;
  capMicrocredits?: number | undefined;
  /** Id or code. */
  projectCode?: string | undefined;
}): Promise<Result<{ job: JobDocument }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:launch' });
  if (!authorised.ok) return authorised;
  const { team, userId } = authorised.value;
  if (userId === null) return refuse('forbidden', 'Jobs are launched by people.');
  return inWriteTransaction(async () => {
    const nothingOwed = await checkNothingOwed(team.id);
    if (!nothingOwed.ok) return nothingOwed;
    const quote = await findOpenQuote({ teamId: team.id, quoteId: options.quoteId });
    if (!quote.ok) return quote;
    const open = await checkOpenJobs(team.id);
    if (!open.ok) return open;
    const projectCodeId = await findProjectCode(team.id, options.projectCode);
    if (!projectCodeId.ok) return projectCodeId;
    const cap = capOf(quote.value, options.capMicrocredits);
    if (!cap.ok) return cap;

    const { inputs, modelVersionId, expectedMicrocredits, secondsPerReplicate } = quote.value;
    const version = (await ModelVersion.findByPk(modelVersionId))!;
    const job = await Job.create({
      id: newId('job'),
      teamId: team.id,
      userId,
      modelId: version.modelId,
      modelVersionId,
      projectCodeId: projectCodeId.value,
      name: options.name,
      state: 'queued',
      lane: inputs.lane,
      inputs,
      seed: inputs.seed,
      engineVersion,
      replicatesPlanned: inputs.replicates,
      replicatesDone: 0,
      events: 0,
      expectedMicrocredits,
      chargedMicrocredits: 0,
      heldMicrocredits: cap.value,
      capMicrocredits: cap.value,
      secondsPerReplicate,
      createdAt: nowText(),
    });
    const { species, observables = [] } = version.document;
    const segment = await openSegment({
      job,
      quote: quote.value,
      userId,
      tokenId: options.actor.kind === 'token' ? options.actor.tokenId : null,
      capMicrocredits: cap.value,
      firstReplicate: 0,
      gridPoints: inputs.gridIntervals + 1,
      observables: species.length + observables.length,
    });
    if (!segment.ok) return segment;
    afterCommit(() => {
      announceJobChange(job.id);
      wakeDispatcher(job.id);
    });
    return accept({ job: await presentJob(job) });
  });
}

async function findProjectCode(teamId: string, wanted: string | undefined): Promise<Result<string | null>> {
  if (wanted === undefined) return accept(null);
  const code = await ProjectCode.findOne({ where: { teamId, [Op.or]: [{ id: wanted }, { code: wanted }] } });
  if (!code)
    return refuse('not_found', 'There is no such project code in this team.', {
      errors: [{ path: 'projectCode', code: 'not_found', message: 'Unknown project code.' }],
    });
  return code.closedAt
    ? refuse('project_code_closed', `Project code ${code.code} is closed. Choose an open one.`)
    : accept(code.id);
}
