/** How noisy an observable is over time: Fano factor or coefficient of variation, with its standard error. */
import { useMemo, useState } from 'react';
import { noiseOption, noiseTable } from '@/charts/noise-option.ts';
import { countText, valueWithError } from '@/charts/number-text.ts';
import { observableTitle } from '@/charts/time-course-option.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import type { FigureContent } from '@/components/charts/figure.ts';
import { SelectField } from '@/components/ui/Field.tsx';
import type { JobDocument } from '@/contracts/jobs.ts';
import { timeWithUnit } from './job-words.ts';
import { ObservableSelect } from './ObservableSelect.tsx';
import type { NamedObservable, Results } from './results-data.ts';

const measures = {
  fano: { label: 'Fano factor', explained: 'variance / mean; 1 for a Poisson distribution' },
  cv: { label: 'Coefficient of variation', explained: 'SD / mean' },
} as const;
type Measure = keyof typeof measures;

export function NoiseTab(props: {
  results: Results;
  chosen: NamedObservable;
  job: JobDocument;
  onObservable: (id: string) => void;
}) {
  const { results, chosen, job, onObservable } = props;
  const [measure, setMeasure] = useState<Measure>('fano');
  const { times, timeUnit, replicates } = results;
  const content = useMemo((): FigureContent => {
    const values = chosen[measure];
    const standardErrors = chosen[`${measure}StandardError`];
    const title = `${measures[measure].label} of ${observableTitle(chosen)}`;
    const figure = { title, times, timeUnit, replicates, values, standardErrors };
    const { value, error } = valueWithError(values.at(-1)!, standardErrors.at(-1)!);
    const atEnd = Number.isFinite(values.at(-1)!)
      ? `at ${timeWithUnit(times.at(-1)!, timeUnit)} it is ${value} ± ${error} (standard error)`
      : `at ${timeWithUnit(times.at(-1)!, timeUnit)} it does not exist, since the mean is 0`;
    return {
      description: `${title} over time, from ${countText(replicates)} replicates; ${atEnd}.`,
      option: (theme) => noiseOption(figure, theme),
      table: () => noiseTable(figure),
      fileStem: `${job.id}-${chosen.id}-${measure}`,
    };
  }, [chosen, measure, times, timeUnit, replicates, job.id]);
  return (
    <>
      <div className="mb-2 flex flex-wrap items-end gap-4">
        <ObservableSelect observables={results.observables} value={chosen.id} onChange={onObservable} />
        <SelectField
          label="Measure"
          value={measure}
          choices={Object.entries(measures).map(([value, { label }]) => ({ value, label }))}
          onChange={(event) => setMeasure(event.target.value as Measure)}
        />
      </div>
      <Figure {...content} />
      <p className="mt-1 text-sm text-soft">
        {measures[measure].label}: {measures[measure].explained}. Errors by the delta method.
      </p>
    </>
  );
}
