/** Whole replicates as they ran: all kept ones, or one picked out and stepped through. */
import { useMemo, useState } from 'react';
import { countText } from '@/charts/number-text.ts';
import { observableTitle } from '@/charts/time-course-option.ts';
import { tracesOption, tracesTable } from '@/charts/traces-option.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import type { FigureContent } from '@/components/charts/figure.ts';
import { Button } from '@/components/ui/Button.tsx';
import { SelectField } from '@/components/ui/Field.tsx';
import type { JobDocument } from '@/contracts/jobs.ts';
import { ObservableSelect } from './ObservableSelect.tsx';
import type { NamedObservable, ObservableTrace, Results } from './results-data.ts';

export function TracesTab(props: {
  results: Results;
  chosen: NamedObservable;
  traces: readonly ObservableTrace[];
  job: JobDocument;
  onObservable: (id: string) => void;
}) {
  const { results, chosen, traces, job, onObservable } = props;
  const [picked, setPicked] = useState<number | null>(null);
  const content = useMemo((): FigureContent => {
    const figure = {
      title: observableTitle(chosen),
      times: results.times,
      timeUnit: results.timeUnit,
      traces,
      highlighted: picked,
    };
    return {
      description: `${figure.title} in ${traces.length === 1 ? 'one replicate' : `the first ${countText(traces.length)} replicates`}${picked === null ? '' : `, replicate ${countText(picked)} picked out`}, at the grid times.`,
      option: (theme) => tracesOption(figure, theme),
      table: () => tracesTable(figure),
      fileStem: `${job.id}-${chosen.id}-traces`,
    };
  }, [results, chosen, traces, picked, job.id]);
  if (traces.length === 0) {
    return (
      <p className="text-soft">
        {job.keptTraces === 0
          ? 'This job was launched to keep no traces. A clone can keep some.'
          : 'No trace is complete yet.'}
      </p>
    );
  }
  const at = traces.findIndex(({ replicate }) => replicate === picked);
  const step = (by: number): void => {
    const next = at < 0 ? (by > 0 ? 0 : traces.length - 1) : (at + by + traces.length) % traces.length;
    setPicked(traces[next]!.replicate);
  };
  return (
    <>
      <div className="mb-2 flex flex-wrap items-end gap-x-4 gap-y-3">
        <ObservableSelect observables={results.observables} value={chosen.id} onChange={onObservable} />
        <SelectField
          label="Picked out"
          value={picked === null ? '' : String(picked)}
          choices={[
            { value: '', label: 'None' },
            ...traces.map(({ replicate }) => ({
              value: String(replicate),
              label: `Replicate ${countText(replicate)}`,
            })),
          ]}
          onChange={(event) => setPicked(event.target.value === '' ? null : Number(event.target.value))}
        />
        <div className="flex gap-2">
          <Button onClick={() => step(-1)}>Previous</Button>
          <Button onClick={() => step(1)}>Next</Button>
        </div>
      </div>
      <Figure {...content} />
    </>
  );
}
