/** One number over all points of a sweep: curves with intervals, or a heat map over two quantities. */
import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { sweepCurvesOption, sweepMapOption, sweepTable } from '@/charts/sweep-option.ts';
import { countText } from '@/charts/number-text.ts';
import { observableTitle } from '@/charts/time-course-option.ts';
import { callApi } from '@/components/api/call-api.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import type { FigureContent } from '@/components/charts/figure.ts';
import { SelectField } from '@/components/ui/Field.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { readSweep, type SweepResultsDocument } from '@/contracts/job-sweep.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { targetName } from '@/domain/jobs/sweep.ts';
import { timeWithUnit } from '../job-words.ts';
import { ObservableSelect } from '../ObservableSelect.tsx';
import { directionWords } from '../PassageFields.tsx';
import type { NamedObservable, Results } from '../results-data.ts';
import { TimeScrubber } from '../TimeScrubber.tsx';
import { axisValues, curvesAlong, mapOf } from './sweep-figures.ts';

const measures = {
  mean: 'Mean',
  sd: 'Standard deviation',
  fano: 'Fano factor',
  cv: 'Coefficient of variation',
} as const;
const askEveryMs = 4_000;

export function SweepTab(props: {
  team: string;
  job: JobDocument;
  stage: string;
  over: boolean;
  results: Results;
  chosen: NamedObservable;
  timeIndex: number;
  onTime: (index: number) => void;
  onObservable: (id: string) => void;
}) {
  const { team, job, stage, over, results, chosen, timeIndex, onTime, onObservable } = props;
  const [measure, setMeasure] = useState<string>('mean');
  const time = results.times[timeIndex]!;
  const passage = measure.startsWith('passed') ? Number(measure.slice('passed'.length)) : null;
  const query =
    passage === null
      ? { statistic: measure as keyof typeof measures, observable: chosen.id, time }
      : { statistic: 'passed' as const, passage };
  const asked = useQuery({
    queryKey: ['sweep', job.id, stage, query],
    placeholderData: keepPreviousData,
    refetchInterval: over ? false : askEveryMs,
    staleTime: over ? Infinity : askEveryMs / 2,
    queryFn: async ({ signal }) => {
      const called = await callApi(readSweep, { path: { team, job: job.id }, query, signal });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value;
    },
  });
  const title =
    passage === null
      ? `${measures[measure as keyof typeof measures]} of ${observableTitle(chosen)} at ${timeWithUnit(time, results.timeUnit)}`
      : `Probability that ${passageWords(job, passage)} by ${timeWithUnit(job.horizon, results.timeUnit)}`;
  return (
    <>
      <div className="mb-2 flex flex-wrap items-end gap-4">
        <SelectField
          label="Number"
          value={measure}
          choices={[
            ...Object.entries(measures).map(([value, label]) => ({ value, label })),
            ...job.passages.map((_, index) => ({ value: `passed${index}`, label: `P(${passageWords(job, index)})` })),
          ]}
          onChange={(event) => setMeasure(event.target.value)}
        />
        {passage === null && (
          <>
            <ObservableSelect observables={results.observables} value={chosen.id} onChange={onObservable} />
            <TimeScrubber times={results.times} timeUnit={results.timeUnit} index={timeIndex} onIndex={onTime} />
          </>
        )}
      </div>
      {asked.error && (
        <Notice tone="failure" title="The sweep could not be read">
          {asked.error.message}
        </Notice>
      )}
      {!asked.data && !asked.error && <Waiting>Reading the points</Waiting>}
      {asked.data && <SweepFigures found={asked.data} title={title} fileStem={`${job.id}-sweep-${measure}`} />}
    </>
  );
}

const passageWords = ({ passages }: JobDocument, index: number): string => {
  const { observable, direction, threshold } = passages[index]!;
  return `${observable} ${directionWords[direction]} ${threshold}`;
};

function SweepFigures({ found, title, fileStem }: { found: SweepResultsDocument; title: string; fileStem: string }) {
  const { sweep, values, replicates } = found;
  const names = sweep.targets.map(targetName);
  const isGrid = sweep.kind === 'grid' && names.length > 1;
  const [along, setAlong] = useState(0);
  const [view, setView] = useState<'map' | 'curves'>(isGrid ? 'map' : 'curves');
  const [across, setAcross] = useState(1);
  const [fixed, setFixed] = useState<Record<number, number>>({});
  const other = across === along ? (along === 0 ? 1 : 0) : across;
  const held = names
    .map((_, target) => target)
    .filter((target) => isGrid && target !== along && target !== other)
    .map((target) => ({ target, value: fixed[target] ?? axisValues(sweep, target)[0]! }));
  const choice = { sweep, found: values, along, across: isGrid ? other : null, held };
  const heldWords = held.map(({ target, value }) => `, ${names[target]} = ${value}`).join('');
  const content: FigureContent = {
    description: `${title}, at ${countText(values.length)} points from ${countText(replicates)} replicates each, along ${names[along]}${heldWords}; bars are 95 % intervals.`,
    option: (theme) =>
      isGrid && view === 'map'
        ? sweepMapOption({ title, replicates, ...mapOf(choice, names) }, theme)
        : sweepCurvesOption(
            {
              title,
              along: names[along]!,
              replicates,
              curves: curvesAlong(choice, names),
              scattered: sweep.kind !== 'grid',
            },
            theme,
          ),
    table: () => sweepTable({ title, replicates, targets: names, values: sweep.values, found: values }),
    fileStem,
  };
  const targets = names.map((label, target) => ({ value: String(target), label }));
  return (
    <>
      {names.length > 1 && (
        <div className="mb-2 flex flex-wrap items-end gap-4">
          {isGrid && (
            <SelectField
              label="Drawn as"
              value={view}
              choices={[
                { value: 'map', label: 'Heat map' },
                { value: 'curves', label: 'Curves' },
              ]}
              onChange={(event) => setView(event.target.value as 'map' | 'curves')}
            />
          )}
          <SelectField
            label="Along"
            value={String(along)}
            choices={targets}
            onChange={(event) => setAlong(Number(event.target.value))}
          />
          {isGrid && names.length > 2 && (
            <SelectField
              label={view === 'map' ? 'Upwards' : 'A curve for each'}
              value={String(other)}
              choices={targets.filter(({ value }) => value !== String(along))}
              onChange={(event) => setAcross(Number(event.target.value))}
            />
          )}
          {held.map(({ target, value }) => (
            <SelectField
              key={target}
              label={`Where ${names[target]} is`}
              value={String(value)}
              choices={axisValues(sweep, target).map((each) => ({ value: String(each), label: String(each) }))}
              onChange={(event) => setFixed({ ...fixed, [target]: Number(event.target.value) })}
            />
          ))}
        </div>
      )}
      <Figure key={`${view} ${along} ${other}`} {...content} />
      <p className="mt-1 text-sm text-soft">
        Bars and bounds: 95 % intervals at each point by itself. With many points some intervals miss their number: one
        in twenty on average.
      </p>
    </>
  );
}
