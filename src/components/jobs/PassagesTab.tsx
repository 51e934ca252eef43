/** First passages: how many replicates have passed by when, and what that says, with intervals. */
import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { countText, numberText, valueWithError } from '@/charts/number-text.ts';
import { passageOption, passageTable } from '@/charts/passage-option.ts';
import { callApi } from '@/components/api/call-api.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import { SelectField } from '@/components/ui/Field.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { jobPassages, type JobDocument, type PassagesDocument } from '@/contracts/jobs.ts';
import { timeWithUnit } from './job-words.ts';
import { directionWords } from './PassageFields.tsx';

type Passage = PassagesDocument['passages'][number];

const titleOf = (
  { observable, direction, threshold }: Pick<Passage, 'observable' | 'direction' | 'threshold'>,
  names: Record<string, string>,
): string => `${names[observable] ?? observable} ${directionWords[direction]} ${numberText(threshold, 6)}`;

export function PassagesTab(props: {
  team: string;
  job: JobDocument;
  /** Of a sweep. */
  point: number;
  names: Record<string, string>;
  stage: string;
  over: boolean;
}) {
  const { team, job, point, names, stage, over } = props;
  const [chosen, setChosen] = useState(0);
  const query = useQuery({
    queryKey: ['passages', job.id, stage, point],
    placeholderData: keepPreviousData,
    refetchInterval: over ? false : 4_000,
    staleTime: over ? Infinity : 2_000,
    queryFn: async ({ signal }) => {
      const called = await callApi(jobPassages, { path: { team, job: job.id }, query: { point }, signal });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value;
    },
  });
  if (query.error)
    return (
      <Notice tone="failure" title="The first passages could not be read">
        {query.error.message}
      </Notice>
    );
  const passage = query.data?.passages[chosen];
  if (!query.data || !passage) return <Waiting>Reading the first passages</Waiting>;
  const { times, replicates } = query.data;
  const title = titleOf(passage, names);
  const figure = { title, times, timeUnit: job.timeUnit ?? undefined, replicates, curve: passage.curve };
  return (
    <>
      {query.data.passages.length > 1 && (
        <SelectField
          label="First passage"
          fieldClassName="mb-3 max-w-sm"
          value={String(chosen)}
          choices={query.data.passages.map((one, index) => ({ value: String(index), label: titleOf(one, names) }))}
          onChange={(event) => setChosen(Number(event.target.value))}
        />
      )}
      <Figure
        description={`Share of replicates in which ${title}, by time, with the 95 % interval (Wilson), from ${countText(replicates)} replicates.`}
        option={(theme) => passageOption(figure, theme)}
        table={() => passageTable(figure)}
        fileStem={`${job.id}-first-passage-${chosen}`}
      />
      <Estimates {...{ passage, replicates, job }} />
    </>
  );
}

function Estimates({ passage, replicates, job }: { passage: Passage; replicates: number; job: JobDocument }) {
  const { passed, probability, restrictedMean, mean, quantiles } = passage;
  const unit = job.timeUnit ? ` ${job.timeUnit}` : '';
  const time = (value: number | null, absent: string): string =>
    value === null ? absent : `${numberText(value, 4)}${unit}`;
  const withError = ({ value, standardError }: { value: number; standardError: number | null }): string => {
    const words = valueWithError(value, standardError ?? NaN);
    return `${words.value} ± ${words.error}${unit}`;
  };
  const rows: [string, string, string?][] = [
    [
      `Passed by ${timeWithUnit(job.horizon, job.timeUnit)}`,
      numberText(probability.value, 4),
      `95 %: ${numberText(probability.lower, 4)} – ${numberText(probability.upper, 4)}; ${countText(passed)} of ${countText(replicates)} replicates`,
    ],
    ['Mean of the smaller of passage time and horizon', withError(restrictedMean), '± standard error'],
    [
      'Mean passage time',
      mean ? withError(mean) : 'not known',
      mean ? '± standard error' : 'Some replicates had not passed by the horizon.',
    ],
    ...Object.entries(quantiles).map(([p, quantile]): [string, string, string] => [
      `${numberText(Number(p) * 100, 3)} % of replicates have passed by`,
      time(quantile.value, 'not reached by the horizon'),
      `95 %: ${time(quantile.lower, 'beyond the horizon')} – ${time(quantile.upper, 'beyond the horizon or unbounded')}`,
    ]),
  ];
  return (
    <>
      <dl className="facts mt-4 border-t border-rule">
        {rows.map(([term, value, more]) => (
          <div key={term}>
            <dt>{term}</dt>
            <dd>
              {value}
              {more && <span className="block text-xs font-normal text-soft">{more}</span>}
            </dd>
          </div>
        ))}
      </dl>
      <p className="mt-3 text-sm text-soft">
        A replicate that came to rest before passing counts as not passed by the horizon.
        {job.method === 'leap' && ' Passages are resolved to the end of the leap in which they happened.'}
      </p>
    </>
  );
}
