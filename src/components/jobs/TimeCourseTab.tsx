/** Mean with its error over time, the quantile fan, sample traces where wished; or all means together. */
import { useMemo, useState } from 'react';
import { meansOption, meansTable } from '@/charts/means-option.ts';
import { countText, valueWithError } from '@/charts/number-text.ts';
import { observableTitle, timeCourseOption, timeCourseTable, type TimeCourse } from '@/charts/time-course-option.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import type { FigureContent } from '@/components/charts/figure.ts';
import { CheckField } from '@/components/ui/Field.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import type { JobDocument } from '@/contracts/jobs.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { timeWithUnit } from './job-words.ts';
import { NumbersTable } from './NumbersTab.tsx';
import { allObservables, ObservableSelect } from './ObservableSelect.tsx';
import type { NamedObservable, ObservableTrace, Results } from './results-data.ts';
import { useMeanField } from './use-mean-field.ts';

/** Traces drawn over the band. */
const tracesDrawn = 12;

export function TimeCourseTab(props: {
  results: Results;
  chosen: NamedObservable;
  traces: readonly ObservableTrace[];
  job: JobDocument;
  /** Of a sweep. */
  point: number;
  network: NetworkDocument | null;
  onObservable: (id: string) => void;
}) {
  const { results, chosen, traces, job, point, network, onObservable } = props;
  const [together, setTogether] = useState(false);
  const [fan, setFan] = useState(true);
  const [withTraces, setWithTraces] = useState(false);
  const [withMeanField, setWithMeanField] = useState(false);
  const meanField = useMeanField(job, point, network, withMeanField);
  const curve = meanField.curves?.observables.find(({ id }) => id === chosen.id)?.values;
  const content = useMemo((): FigureContent => {
    const { times, timeUnit, replicates } = results;
    if (together) {
      const means = { times, timeUnit, observables: results.observables, replicates };
      return {
        description: `Means of ${results.observables.length} observables over time, from ${countText(replicates)} replicates.`,
        option: (theme) => meansOption(means, theme),
        table: () => meansTable(means),
        fileStem: `${job.id}-means`,
      };
    }
    const course: TimeCourse = {
      times,
      timeUnit,
      observable: chosen,
      replicates,
      fan,
      traces: withTraces ? traces.slice(0, tracesDrawn) : [],
      meanField: curve,
    };
    return {
      description: caption(results, chosen),
      option: (theme) => timeCourseOption(course, theme),
      table: () => timeCourseTable(course),
      fileStem: `${job.id}-${chosen.id}-time-course`,
    };
  }, [results, chosen, traces, fan, withTraces, curve, together, job.id]);
  return (
    <>
      <div className="mb-2 flex flex-wrap items-end gap-x-6 gap-y-3">
        <ObservableSelect
          observables={results.observables}
          value={together ? allObservables : chosen.id}
          withAll
          onChange={(id) => {
            setTogether(id === allObservables);
            if (id !== allObservables) onObservable(id);
          }}
        />
        {!together && (
          <div className="flex min-h-10 flex-wrap items-center gap-x-5 gap-y-2">
            <CheckField label="Quantile fan" checked={fan} onChange={(event) => setFan(event.target.checked)} />
            {traces.length > 0 && (
              <CheckField
                label="Sample traces"
                checked={withTraces}
                onChange={(event) => setWithTraces(event.target.checked)}
              />
            )}
            {network && (
              <CheckField
                label="Mean field"
                checked={withMeanField}
                onChange={(event) => setWithMeanField(event.target.checked)}
              />
            )}
          </div>
        )}
      </div>
      {meanField.solving && <Waiting>Solving the rate equations in this browser</Waiting>}
      {meanField.problem && (
        <Notice tone="caution" className="mb-2" title="No mean-field curve">
          {meanField.problem}
        </Notice>
      )}
      <Figure {...content} />
      {curve && !together && (
        <p className="mt-1 text-sm text-soft">
          The rate equations are the large-count limit, an approximation: where they leave the mean, chance matters
          here.
        </p>
      )}
      <div className="mt-6">
        <NumbersTable results={results} at={results.times.length - 1} />
      </div>
    </>
  );
}

function caption({ times, timeUnit, replicates }: Results, observable: NamedObservable): string {
  const last = times.length - 1;
  const { value, error } = valueWithError(observable.mean[last]!, observable.meanStandardError[last]!);
  return `Mean of ${observableTitle(observable)} over time, from ${countText(replicates)} replicates; at ${timeWithUnit(times[last]!, timeUnit)} it is ${value} ± ${error} (standard error).`;
}
