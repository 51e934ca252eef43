/** Beside a job: stop it, what it cost and to whom, its archive, and doing it again. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { ArchiveDownload } from '@/components/archives/ArchiveDownload.tsx';
import { ButtonLink } from '@/components/ui/Button.tsx';
import { ConfirmButton } from '@/components/ui/Dialog.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { Credits, Moment } from '@/components/ui/Amounts.tsx';
import { countText, creditsText } from '@/components/ui/amounts-text.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { cancelJob, type JobDocument } from '@/contracts/jobs.ts';
import { paths } from '@/paths.ts';
import { ExtendPanel, mayBeExtended } from './ExtendPanel.tsx';
import { isOver, laneWords } from './job-words.ts';
import { useStatistics } from './use-statistics.ts';

interface Props {
  team: string;
  timeZone: string;
  job: JobDocument;
  names: Record<string, string>;
  mayLaunch: boolean;
  mayReadResults: boolean;
  onJob: (job: JobDocument) => void;
}

export function JobAside({ team, timeZone, job, names, mayLaunch, mayReadResults, onJob }: Props) {
  const over = isOver(job);
  return (
    <div className="space-y-8">
      {!over && mayLaunch && <StopButton {...{ team, job, onJob }} />}
      {mayBeExtended(job) && mayLaunch && mayReadResults && <KnownExtendPanel {...{ team, job, names, onJob }} />}
      <section aria-labelledby="charge-title">
        <h2 id="charge-title" className="text-sm font-semibold">
          Charge
        </h2>
        <dl className="facts mt-1">
          <div>
            <dt>Charged</dt>
            <dd>
              <Credits microcredits={job.chargedMicrocredits} exact />
            </dd>
          </div>
          <div>
            <dt>Quoted</dt>
            <dd className="font-normal">
              about <Credits microcredits={job.expectedMicrocredits} />
            </dd>
          </div>
          <div>
            <dt>Cap</dt>
            <dd className="font-normal">
              <Credits microcredits={job.capMicrocredits} />
            </dd>
          </div>
          {job.heldMicrocredits > 0 && (
            <div>
              <dt>Still held</dt>
              <dd className="font-normal">
                <Credits microcredits={job.heldMicrocredits} />
              </dd>
            </div>
          )}
          <div>
            <dt>Project</dt>
            <dd className="font-normal">{job.projectCode?.code ?? 'none'}</dd>
          </div>
        </dl>
        <p className="mt-2 text-xs text-soft">{chargeWords(job)}</p>
        <p className="mt-1 text-sm">
          <a className="link" href={paths.jobCost(team, job.id)}>
            How this charge came about
          </a>
        </p>
      </section>
      <ArchiveDownload team={team} job={job} />
      <section aria-labelledby="facts-title">
        <h2 id="facts-title" className="text-sm font-semibold">
          Run
        </h2>
        <dl className="facts mt-1">
          <div>
            <dt>Launched by</dt>
            <dd className="font-normal">{job.launchedBy.name}</dd>
          </div>
          <div>
            <dt>Launched</dt>
            <dd className="font-normal">
              <Moment time={job.createdAt} timeZone={timeZone} />
            </dd>
          </div>
          {job.finishedAt && (
            <div>
              <dt>Finished</dt>
              <dd className="font-normal">
                <Moment time={job.finishedAt} timeZone={timeZone} />
              </dd>
            </div>
          )}
          <div>
            <dt>Engine</dt>
            <dd className="font-normal">{job.engineVersion}</dd>
          </div>
        </dl>
      </section>
      {mayLaunch && (
        <section aria-labelledby="again-title" className="text-sm">
          <h2 id="again-title" className="font-semibold">
            Do it again
          </h2>
          <div className="mt-2 flex flex-wrap gap-2">
            <ButtonLink size="small" href={paths.newJob(team, { from: job.id })}>
              Clone with a new seed
            </ButtonLink>
            <ButtonLink size="small" variant="quiet" href={paths.newJob(team, { from: job.id, again: '1' })}>
              Run again, same seed
            </ButtonLink>
          </div>
        </section>
      )}
    </div>
  );
}

function KnownExtendPanel({ team, job, names, onJob }: Pick<Props, 'team' | 'job' | 'names' | 'onJob'>) {
  const { results } = useStatistics(team, job, names);
  // A new number of replicates is a new question.
  return <ExtendPanel key={job.replicatesDone} {...{ team, job, results, onJob }} />;
}

function chargeWords(job: JobDocument): string {
  const base = `${countText(job.events)} events of ${countText(job.replicatesDone)} complete replicates on the ${laneWords[job.lane].label} lane.`;
  if (!isOver(job)) return `${base} Work on replicates that are not complete is not charged.`;
  const rest = job.capMicrocredits - job.chargedMicrocredits;
  return rest > 0 ? `${base} The rest of the hold, ${creditsText(rest)} credits, came back.` : base;
}

function StopButton({ team, job, onJob }: Pick<Props, 'team' | 'job' | 'onJob'>) {
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const kept = countText(job.replicatesDone);
  async function stop(): Promise<void> {
    const called = await callApi(cancelJob, { path: { team, job: job.id }, body: {}, idempotencyKey: intentKey() });
    if (called.ok) onJob(called.value.job);
    else setProblem(called.problem);
  }
  return (
    <div>
      <ConfirmButton
        variant="secondary"
        title={`Stop “${job.name}”?`}
        question={
          <p>
            The replicates that are complete when it stops are kept and charged, {kept} so far; the rest of the hold
            comes back. A job that was stopped does not go on, but it can be cloned.
          </p>
        }
        confirm={`Stop and keep ${kept}`}
        onConfirm={stop}
      >
        Stop here and keep {kept}
      </ConfirmButton>
      {problem && <ProblemNotice className="mt-3" problem={problem} />}
    </div>
  );
}
