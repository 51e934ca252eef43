/** The time course of one observable: mean with its error, quantile fan, and sample traces where wished. */
import type { EChartsOption } from 'echarts';
import type { EnsembleStatistics } from '@/engine/ensemble.ts';
import type { FigureTable } from './figure-table.ts';
import { bandSeries, frame, labelSeries, timeTitle, type DirectLabel } from './frame.ts';
import { countText, numberText, valueWithError } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

/** What figures of means need to know of an observable. */
export type DrawnObservable = Pick<
  EnsembleStatistics['observables'][number],
  'id' | 'mean' | 'meanStandardError' | 'sd' | 'sdStandardError' | 'quantiles'
> & { name?: string | undefined };

export interface TimeCourse {
  times: readonly number[];
  timeUnit?: string | undefined;
  observable: DrawnObservable;
  replicates: number;
  /** Bands between the 5 and 95 % and the 25 and 75 % quantiles. */
  fan: boolean;
  /** Values of one kept trace each, on the same times. */
  traces: readonly { replicate: number; values: readonly number[] }[];
  /** The solution of the rate equations on the same times, where it is to be shown. */
  meanField?: readonly number[] | undefined;
}

const last = <T>(list: readonly T[]): T => list[list.length - 1]!;

export const observableTitle = ({ id, name }: { id: string; name?: string | undefined }): string =>
  name === undefined || name === '' ? id : name;

/** The figure. Assumes at least one time; quantiles that are absent leave their band out. */
export function timeCourseOption(course: TimeCourse, theme: ChartTheme): EChartsOption {
  const { times, observable, fan } = course;
  const { mean, meanStandardError, quantiles } = observable;
  const end = last(times);
  const labels: DirectLabel[] = [{ x: end, y: last(mean), text: 'mean ± SE', color: theme.bromo }];
  if (course.meanField) labels.push({ x: end, y: last(course.meanField), text: 'rate equation', color: theme.methyl });
  const series: object[] = [];

  const band = (name: string, low: string, high: string, opacity: number) => {
    const [lower, upper] = [quantiles[low], quantiles[high]];
    if (lower === undefined || upper === undefined) return;
    series.push(bandSeries({ name, xs: times, low: lower, high: upper, color: theme.bromo, opacity }));
    labels.push({ x: end, y: last(upper), text: name, color: theme.soft });
  };
  if (fan) {
    band('5–95 %', '0.05', '0.95', 0.14);
    band('25–75 %', '0.25', '0.75', 0.16);
  }
  for (const { replicate, values } of course.traces) {
    series.push({
      type: 'line',
      name: `replicate ${countText(replicate)}`,
      step: 'end',
      showSymbol: false,
      silent: true,
      z: 2,
      tooltip: { show: false },
      lineStyle: { color: theme.bromo, width: 1, opacity: 0.35 },
      data: times.map((time, index) => [time, values[index]!]),
    });
  }
  series.push(
    bandSeries({
      name: '± SE',
      xs: times,
      low: mean.map((value, index) => value - meanStandardError[index]!),
      high: mean.map((value, index) => value + meanStandardError[index]!),
      color: theme.bromo,
      opacity: 0.45,
    }),
    {
      type: 'line',
      name: 'mean',
      showSymbol: times.length === 1,
      z: 4,
      lineStyle: { color: theme.bromo, width: 2.25 },
      itemStyle: { color: theme.bromo },
      data: times.map((time, index) => [time, mean[index]!]),
    },
    ...meanFieldSeries(course, theme),
    labelSeries(labels, theme),
  );

  const base = frame(theme, {
    x: { title: timeTitle(course.timeUnit), min: times[0]!, max: end },
    y: { title: `${observableTitle(observable)}, count` },
    labels: true,
  });
  return {
    ...base,
    tooltip: { ...base.tooltip, formatter: readout(course) },
    series: series as NonNullable<EChartsOption['series']>,
  } as EChartsOption;
}

/** Dashed and in the colour of approximations; a time without a value leaves a gap. */
const meanFieldSeries = ({ times, meanField }: TimeCourse, theme: ChartTheme): object[] =>
  meanField === undefined
    ? []
    : [
        {
          type: 'line',
          name: 'rate equation',
          showSymbol: false,
          z: 3,
          tooltip: { show: false },
          lineStyle: { color: theme.methyl, width: 2, type: [6, 4] },
          itemStyle: { color: theme.methyl },
          data: times.map((time, index) => [time, meanField[index] ?? NaN]),
        },
      ];

/** What the pointer reads at a time: the mean with its error and the fan's values. */
function readout({ times, timeUnit, observable, replicates, meanField }: TimeCourse) {
  return (items: unknown): string => {
    const [first] = items as { dataIndex: number }[];
    if (first === undefined) return '';
    const at = first.dataIndex;
    const { value, error } = valueWithError(observable.mean[at]!, observable.meanStandardError[at]!);
    const quantile = (probability: string) => numberText(observable.quantiles[probability]?.[at] ?? NaN, 6);
    return [
      `at ${numberText(times[at]!, 6)}${timeUnit ? ` ${timeUnit}` : ''}`,
      `mean ${value} ± ${error}`,
      `5–95 %  ${quantile('0.05')} – ${quantile('0.95')}`,
      ...(meanField ? [`rate equation ${numberText(meanField[at] ?? NaN, 5)}`] : []),
      `from ${countText(replicates)} replicates`,
    ].join('\n');
  };
}

/** The same data as a table: one row per grid time. */
export function timeCourseTable(course: TimeCourse): FigureTable {
  const { times, observable, replicates, timeUnit, traces, meanField } = course;
  const probabilities = Object.keys(observable.quantiles).sort((a, b) => Number(a) - Number(b));
  return {
    caption: `${observableTitle(observable)} over time, from ${countText(replicates)} replicates`,
    columns: [
      timeTitle(timeUnit),
      'mean',
      'standard error of the mean',
      'SD',
      'standard error of the SD',
      ...probabilities.map((probability) => `quantile ${probability}`),
      ...(meanField ? ['rate equation'] : []),
      ...traces.map(({ replicate }) => `replicate ${replicate}`),
    ],
    rows: times.map((time, index) => [
      time,
      observable.mean[index]!,
      observable.meanStandardError[index]!,
      observable.sd[index]!,
      observable.sdStandardError[index]!,
      ...probabilities.map((probability) => observable.quantiles[probability]![index]!),
      ...(meanField ? [meanField[index] ?? NaN] : []),
      ...traces.map(({ values }) => values[index]!),
    ]),
  };
}
