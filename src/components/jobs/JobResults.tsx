/** The results of a job, as far as it has come: figures and numbers, each saying from how many replicates. */
import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useEffect, useMemo, useState } from 'react';
import { approximateNote } from '@/charts/with-note.ts';
import { callApi } from '@/components/api/call-api.ts';
import { FigureNote } from '@/components/charts/Figure.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { Tabs } from '@/components/ui/Tabs.tsx';
import { countText } from '@/components/ui/amounts-text.ts';
import { jobTraces, type JobDocument } from '@/contracts/jobs.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { DistributionTab } from './DistributionTab.tsx';
import { isOver, resultCaution } from './job-words.ts';
import { NoiseTab } from './NoiseTab.tsx';
import { NumbersTab } from './NumbersTab.tsx';
import { PassagesTab } from './PassagesTab.tsx';
import { TimeCourseTab } from './TimeCourseTab.tsx';
import { TracesTab } from './TracesTab.tsx';
import { PointSelect } from './sweep/PointSelect.tsx';
import { SweepTab } from './sweep/SweepTab.tsx';
import { stageOf, useStatistics } from './use-statistics.ts';

const askEveryMs = 4_000;
const tracesShown = 50;
const allTabs = ['sweep', 'time-course', 'distribution', 'noise', 'passages', 'traces', 'numbers'] as const;

interface Props {
  team: string;
  job: JobDocument;
  names: Record<string, string>;
  /** null when the reader may not see the model. */
  network: NetworkDocument | null;
}

export function JobResults({ team, job, names, network }: Props) {
  const over = isOver(job);
  const [tab, setTab] = useInUrl('tab', job.sweep ? 'sweep' : 'time-course');
  const [pointText, setPoint] = useInUrl('point', '0');
  const point = Math.min(Number(/^\d+$/.test(pointText) ? pointText : 0), job.points - 1);
  const [observable, setObservable] = useInUrl('observable', job.observables[0] ?? '');
  const [timeIndex, setTimeIndex] = useState(job.gridIntervals);
  const path = { team, job: job.id };
  const enabled = job.replicatesDone > 0;
  const stage = stageOf(job);
  const { results, problem, askAgain } = useStatistics(team, job, names, point);
  const traces = useQuery({
    queryKey: ['traces', job.id, stage, point],
    enabled: enabled && job.keptTraces > 0,
    placeholderData: keepPreviousData,
    refetchInterval: over || job.replicatesDone >= tracesShown ? false : askEveryMs,
    staleTime: over ? Infinity : askEveryMs,
    queryFn: async ({ signal }) => {
      const called = await callApi(jobTraces, { path, query: { limit: tracesShown, point }, signal });
      return called.ok ? called.value : null;
    },
  });
  const chosen = results?.observables.find(({ id }) => id === observable) ?? results?.observables[0];
  const ownTraces = useMemo(() => {
    const at = traces.data?.observables.indexOf(chosen?.id ?? '') ?? -1;
    return at < 0 ? [] : traces.data!.traces.map(({ replicate, values }) => ({ replicate, values: values[at]! }));
  }, [traces.data, chosen?.id]);

  if (!results || !chosen) return <NothingYet {...{ job, problem }} asked={enabled} onRetry={askAgain} />;
  const shared = { results, chosen, onObservable: setObservable };
  const time = { timeIndex: Math.min(timeIndex, results.times.length - 1), onTime: setTimeIndex };
  const atPoint = { job, point };
  const contents: Record<(typeof allTabs)[number], { label: string; content: React.ReactNode }> = {
    sweep: { label: 'Sweep', content: <SweepTab {...shared} {...time} {...{ team, job, stage, over }} /> },
    'time-course': {
      label: 'Time course',
      content: <TimeCourseTab {...shared} {...atPoint} traces={ownTraces} network={network} />,
    },
    distribution: {
      label: 'Distribution',
      content: <DistributionTab {...shared} {...time} {...atPoint} team={team} stage={stage} />,
    },
    noise: { label: 'Noise', content: <NoiseTab {...shared} job={job} /> },
    passages: { label: 'First passage', content: <PassagesTab {...{ team, job, point, names, stage, over }} /> },
    traces: { label: 'Traces', content: <TracesTab {...shared} traces={ownTraces} job={job} /> },
    numbers: { label: 'Numbers', content: <NumbersTab results={results} {...time} /> },
  };
  const offered = { passages: job.passages.length > 0, sweep: job.sweep !== null };
  const tabIds = allTabs.filter((id) => !(id in offered) || offered[id as keyof typeof offered]);
  const shownTab = tabIds.includes(tab as never) ? tab : 'time-course';
  return (
    <section aria-label="Results">
      {job.sweep && shownTab !== 'sweep' && (
        <PointSelect sweep={job.sweep} point={point} onPoint={(next) => setPoint(String(next))} />
      )}
      {!over && (
        <p className="mb-2 text-sm text-soft">
          So far, from the first {countText(results.replicates)} replicates. The figures follow the job.
        </p>
      )}
      {job.method === 'leap' && (
        <Notice still tone="caution" className="mb-4" title={`Approximate: tau-leaping, ε ${job.epsilon}`}>
          The errors and intervals below are of sampling alone; what leaping shifts comes on top of them.
        </Notice>
      )}
      <FigureNote.Provider value={job.method === 'leap' ? approximateNote : null}>
        <Tabs
          label="Results"
          tabs={tabIds.map((id) => ({ id, ...contents[id] }))}
          chosen={shownTab}
          onChoose={setTab}
        />
      </FigureNote.Provider>
      <p className="mt-8 border-t border-rule pt-3 text-xs text-soft">{resultCaution}</p>
    </section>
  );
}

function NothingYet(props: { job: JobDocument; asked: boolean; problem: string | undefined; onRetry: () => void }) {
  const { job, asked, problem, onRetry } = props;
  if (problem) {
    return (
      <Notice
        tone="failure"
        title="The results could not be read"
        action={
          <button type="button" className="link" onClick={onRetry}>
            Try again
          </button>
        }
      >
        {problem}
      </Notice>
    );
  }
  if (asked) return <Waiting>Reading the results</Waiting>;
  if (isOver(job))
    return <p className="text-soft">No replicate was completed, so there are no results and no charge.</p>;
  return <p className="text-soft">Results appear here with the first complete replicates.</p>;
}

/** A choice that stands in the address, so that it survives a reload and can be sent to a colleague. */
function useInUrl(name: string, fallback: string): [string, (value: string) => void] {
  const [value, setValue] = useState(fallback);
  useEffect(() => {
    const stored = new URLSearchParams(window.location.search).get(name);
    if (stored !== null) setValue(stored);
  }, [name]);
  return [
    value,
    (next) => {
      setValue(next);
      const url = new URL(window.location.href);
      url.searchParams.set(name, next);
      window.history.replaceState(null, '', url);
    },
  ];
}
