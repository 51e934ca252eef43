/** The numbers at a chosen time, each with its standard error, and how much work the replicates were. */
import { countText, numberText, valueWithError } from '@/charts/number-text.ts';
import { Table, type Column } from '@/components/ui/Table.tsx';
import { timeWithUnit } from './job-words.ts';
import { observableLabel } from './ObservableSelect.tsx';
import type { NamedObservable, Results } from './results-data.ts';
import { TimeScrubber } from './TimeScrubber.tsx';

function Estimate({ value, standardError }: { value: number; standardError: number }) {
  const words = valueWithError(value, standardError);
  return (
    <>
      {words.value} <span className="text-xs text-soft">± {words.error}</span>
    </>
  );
}

export function NumbersTab(props: { results: Results; timeIndex: number; onTime: (index: number) => void }) {
  const { results, timeIndex, onTime } = props;
  return (
    <>
      <div className="mb-4 max-w-md">
        <TimeScrubber times={results.times} timeUnit={results.timeUnit} index={timeIndex} onIndex={onTime} />
      </div>
      <NumbersTable results={results} at={timeIndex} />
      <p className="mt-4 text-sm text-soft">
        {eventWords(results)} SE is the standard error over replicates; quantiles are the smallest counts that at least
        that share of the replicates does not exceed.
      </p>
    </>
  );
}

/** Every observable at the grid time `at`. */
export function NumbersTable({ results, at }: { results: Results; at: number }) {
  const { times, timeUnit, replicates, observables } = results;
  const quantile = (observable: NamedObservable, probability: string): string =>
    numberText(observable.quantiles[probability]?.[at] ?? NaN, 6);
  const columns: Column<NamedObservable>[] = [
    { id: 'observable', title: 'Observable', cell: observableLabel },
    {
      id: 'mean',
      title: 'Mean ± SE',
      figure: true,
      cell: (row) => <Estimate value={row.mean[at]!} standardError={row.meanStandardError[at]!} />,
    },
    {
      id: 'sd',
      title: 'SD ± SE',
      figure: true,
      cell: (row) => <Estimate value={row.sd[at]!} standardError={row.sdStandardError[at]!} />,
    },
    { id: 'median', title: 'Median', figure: true, cell: (row) => quantile(row, '0.5') },
    {
      id: 'range',
      title: '5–95 %',
      figure: true,
      cell: (row) => `${quantile(row, '0.05')} – ${quantile(row, '0.95')}`,
    },
  ];
  return (
    <Table
      caption={`At ${timeWithUnit(times[at]!, timeUnit)}, from ${countText(replicates)} replicates`}
      captionHidden={false}
      columns={columns}
      rows={observables}
      rowKey={(row) => row.id}
    />
  );
}

function eventWords({ events, replicates }: Results): string {
  const error = (events.sdPerReplicate ?? NaN) / Math.sqrt(Math.max(1, replicates));
  const each = valueWithError(events.meanPerReplicate, error);
  const spread = events.sdPerReplicate === null ? '' : `, SD ${numberText(events.sdPerReplicate, 3)}`;
  return `${countText(events.total)} events in ${countText(replicates)} replicates: ${each.value} ± ${each.error} each${spread}.`;
}
