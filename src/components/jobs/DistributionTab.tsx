/** How the counts of one observable are distributed over the replicates at a chosen time. */
import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useEffect, useMemo, useState } from 'react';
import { distributionOption, distributionTable, showsIntervals } from '@/charts/distribution-option.ts';
import { observableTitle } from '@/charts/time-course-option.ts';
import { countText, numberText } from '@/charts/number-text.ts';
import { callApi } from '@/components/api/call-api.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import type { FigureContent } from '@/components/charts/figure.ts';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { jobDistribution, type JobDocument } from '@/contracts/jobs.ts';
import type { ModeEvidence } from '@/engine/statistics/mode-evidence.ts';
import { timeWithUnit } from './job-words.ts';
import { ObservableSelect } from './ObservableSelect.tsx';
import type { NamedObservable, Results } from './results-data.ts';
import { TimeScrubber } from './TimeScrubber.tsx';

/** While the slider moves, only a place where it rests this long is asked for. */
const restMs = 60;

export function DistributionTab(props: {
  team: string;
  job: JobDocument;
  /** Of a sweep. */
  point: number;
  stage: string;
  results: Results;
  chosen: NamedObservable;
  timeIndex: number;
  onTime: (index: number) => void;
  onObservable: (id: string) => void;
}) {
  const { team, job, point, stage, results, chosen, timeIndex, onTime, onObservable } = props;
  const rested = useRested(timeIndex);
  const time = results.times[rested] ?? 0;
  const query = useQuery({
    queryKey: ['distribution', job.id, stage, point, chosen.id, rested],
    placeholderData: keepPreviousData,
    staleTime: stage === 'running' ? 4_000 : Infinity,
    queryFn: async ({ signal }) => {
      const called = await callApi(jobDistribution, {
        path: { team, job: job.id },
        query: { observable: chosen.id, time, point },
        signal,
      });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value;
    },
  });
  const { data } = query;
  const content = useMemo((): FigureContent | null => {
    if (data === undefined) return null;
    const observable = results.observables.find(({ id }) => id === data.observable) ?? chosen;
    const at = results.times.indexOf(data.time);
    const figure = {
      title: observableTitle(observable),
      time: data.time,
      timeUnit: results.timeUnit,
      distribution: data,
      mean: at < 0 ? undefined : observable.mean[at],
    };
    return {
      description: `${figure.title} at ${timeWithUnit(data.time, results.timeUnit)} in ${countText(data.replicates)} replicates${range(data.values)}.${showsIntervals(data) ? ' Whiskers: 95 % intervals (Wilson).' : ''}`,
      option: (theme) => distributionOption(figure, theme),
      table: () => distributionTable(figure),
      fileStem: `${job.id}-${observable.id}-at-${at}`,
    };
  }, [data, results, chosen, job.id]);
  return (
    <>
      <div className="mb-2 flex flex-wrap items-end gap-x-6 gap-y-3">
        <ObservableSelect observables={results.observables} value={chosen.id} onChange={onObservable} />
        <TimeScrubber times={results.times} timeUnit={results.timeUnit} index={timeIndex} onIndex={onTime} />
      </div>
      {query.isError && <Notice tone="failure">{query.error.message}</Notice>}
      {content ? <Figure {...content} /> : !query.isError && <Waiting>Reading the distribution</Waiting>}
      {data && <p className="mt-1 text-sm text-soft">{modesText(data.modes)}</p>}
    </>
  );
}

/** What the test says, and no more: not finding a second mode does not show that there is one only. */
function modesText(modes: ModeEvidence | null): string {
  if (!modes)
    return 'Not tested for more than one mode: the dip test asks for whole counts below 4,096 from at least 20 replicates.';
  const { dip, pValue, uniformSamples, moreThanOne } = modes;
  const least = 1 / (uniformSamples + 1);
  const p = pValue <= least * 1.5 ? `p ≤ ${numberText(least, 1)}` : `p = ${numberText(pValue, 2)}`;
  const test = `Hartigan’s dip ${numberText(dip, 3)}, ${p} against ${countText(uniformSamples)} uniform samples`;
  return moreThanOne
    ? `Evidence for more than one mode at this time (${test}). One mode would be flagged in at most 1 of 100 such looks.`
    : `No evidence for more than one mode at this time (${test}). A second mode that is small or near can go unseen.`;
}

function range(values: readonly number[]): string {
  if (values.length === 0) return '';
  return `, from ${numberText(values[0]!, 6)} to ${numberText(values[values.length - 1]!, 6)}`;
}

function useRested(index: number): number {
  const [rested, setRested] = useState(index);
  useEffect(() => {
    const timer = setTimeout(() => setRested(index), restMs);
    return () => clearTimeout(timer);
  }, [index]);
  return rested;
}
