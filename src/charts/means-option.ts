/** The means of several observables in one figure, told apart by colour, dash pattern and a word at the end of each. */
import type { EChartsOption } from 'echarts';
import type { FigureTable } from './figure-table.ts';
import { bandSeries, frame, labelSeries, timeTitle } from './frame.ts';
import { countText, numberText, valueWithError } from './number-text.ts';
import { seriesDashes, type ChartTheme } from './palette.ts';
import { observableTitle, type DrawnObservable } from './time-course-option.ts';

export interface Means {
  times: readonly number[];
  timeUnit?: string | undefined;
  /** At most as many as there are series colours are drawn; the table holds all. */
  observables: readonly DrawnObservable[];
  replicates: number;
}

export function meansOption(means: Means, theme: ChartTheme): EChartsOption {
  const { times } = means;
  const drawn = means.observables.slice(0, theme.series.length);
  const end = times[times.length - 1]!;
  const series = drawn.flatMap((observable, index) => {
    const color = theme.series[index]!;
    const { mean, meanStandardError } = observable;
    return [
      bandSeries({
        name: `${observable.id} ± SE`,
        xs: times,
        low: mean.map((value, at) => value - meanStandardError[at]!),
        high: mean.map((value, at) => value + meanStandardError[at]!),
        color,
        opacity: 0.3,
      }),
      {
        type: 'line',
        name: observableTitle(observable),
        showSymbol: times.length === 1,
        z: 4,
        lineStyle: { color, width: 2, type: seriesDashes[index] },
        itemStyle: { color },
        data: times.map((time, at) => [time, mean[at]!]),
      },
    ];
  });
  const labels = drawn.map((observable, index) => ({
    x: end,
    y: observable.mean[times.length - 1]!,
    text: observableTitle(observable),
    color: theme.series[index]!,
  }));
  const base = frame(theme, {
    x: { title: timeTitle(means.timeUnit), min: times[0]!, max: end },
    y: { title: 'mean ± SE, count' },
    labels: true,
  });
  return {
    ...base,
    tooltip: {
      ...base.tooltip,
      formatter: (items: unknown) => {
        const at = (items as { dataIndex: number }[])[0]?.dataIndex;
        if (at === undefined) return '';
        const lines = drawn.map((observable) => {
          const { value, error } = valueWithError(observable.mean[at]!, observable.meanStandardError[at]!);
          return `${observableTitle(observable)}  ${value} ± ${error}`;
        });
        return [`at ${numberText(times[at]!, 6)}${means.timeUnit ? ` ${means.timeUnit}` : ''}`, ...lines].join('\n');
      },
    },
    series: [...series, labelSeries(labels, theme)],
  } as EChartsOption;
}

export function meansTable({ times, timeUnit, observables, replicates }: Means): FigureTable {
  return {
    caption: `Means over time, from ${countText(replicates)} replicates`,
    columns: [
      timeTitle(timeUnit),
      ...observables.flatMap((observable) => [
        `${observableTitle(observable)}, mean`,
        `${observableTitle(observable)}, standard error`,
      ]),
    ],
    rows: times.map((time, at) => [
      time,
      ...observables.flatMap(({ mean, meanStandardError }) => [mean[at]!, meanStandardError[at]!]),
    ]),
  };
}
