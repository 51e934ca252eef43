/** The numbers at a chosen time, each with its standard error, and how much work the replicates were. */
import { countText, numberText, valueWithError } from '@/charts/number-text.ts';
import { Table, type Column } from '@/components/ui/Table.tsx';
import type { JobDocument } from '@/contracts/jobs.ts';
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

export function NumbersTab(props: {
  results: Results;
  job: JobDocument;
  timeIndex: number;
  onTime: (index: number) => void;
}) {
  const { results, timeIndex: at, onTime } = props;
  const { times, timeUnit, replicates, observables, events } = results;
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
      title: '5 % – 95 %',
      figure: true,
      cell: (row) => `${quantile(row, '0.05')} – ${quantile(row, '0.95')}`,
    },
  ];
  const perReplicate = valueWithError(
    events.meanPerReplicate,
    (events.sdPerReplicate ?? NaN) / Math.sqrt(Math.max(1, replicates)),
  );
  return (
    <>
      <div className="mb-4 max-w-md">
        <TimeScrubber times={times} timeUnit={timeUnit} index={at} onIndex={onTime} />
      </div>
      <Table
        caption={`At ${timeWithUnit(times[at]!, timeUnit)}, from ${countText(replicates)} replicates`}
        captionHidden={false}
        columns={columns}
        rows={observables}
        rowKey={(row) => row.id}
      />
      <p className="mt-4 text-sm text-soft">
        {countText(events.total)} events in {countText(replicates)} replicates: {perReplicate.value} ±{' '}
        {perReplicate.error} each
        {events.sdPerReplicate !== null && `, SD ${numberText(events.sdPerReplicate, 3)}`}. SE is the standard error
        over replicates; quantiles are the smallest counts that at least that share of the replicates does not exceed.
      </p>
    </>
  );
}
