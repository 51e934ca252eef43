/** Fano factor or coefficient of variation of one observable over time, with its standard error. */
import type { EChartsOption } from 'echarts';
import type { FigureTable } from './figure-table.ts';
import { bandSeries, frame, timeTitle } from './frame.ts';
import { countText, numberText, valueWithError } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

export interface NoiseFigure {
  /** What is drawn, as the axis says it: "Fano factor of P". */
  title: string;
  times: readonly number[];
  timeUnit?: string | undefined;
  replicates: number;
  /** NaN where the mean is 0. */
  values: readonly number[];
  standardErrors: readonly number[];
}

export function noiseOption(figure: NoiseFigure, theme: ChartTheme): EChartsOption {
  const { title, times, timeUnit, replicates, values, standardErrors } = figure;
  const base = frame(theme, {
    x: { title: timeTitle(timeUnit), min: times[0]!, max: times.at(-1)! },
    y: { title },
    labels: false,
  });
  const known = times.map((_, at) => at).filter((at) => Number.isFinite(values[at]!));
  return {
    ...base,
    tooltip: {
      ...base.tooltip,
      formatter: (items: unknown) => {
        const at = (items as { dataIndex: number }[])[0]?.dataIndex;
        if (at === undefined) return '';
        const { value, error } = valueWithError(values[at]!, standardErrors[at]!);
        return [
          `at ${numberText(times[at]!, 4)}${timeUnit ? ` ${timeUnit}` : ''}`,
          `${value} ± ${error}`,
          `from ${countText(replicates)} replicates`,
        ].join('\n');
      },
    },
    series: [
      bandSeries({
        name: '± SE',
        xs: known.map((at) => times[at]!),
        low: known.map((at) => values[at]! - standardErrors[at]!),
        high: known.map((at) => values[at]! + standardErrors[at]!),
        color: theme.bromo,
        opacity: 0.3,
      }),
      {
        type: 'line',
        name: title,
        showSymbol: false,
        z: 4,
        lineStyle: { color: theme.bromo, width: 2.25 },
        itemStyle: { color: theme.bromo },
        data: times.map((time, at) => [time, values[at]!]),
      },
    ],
  } as EChartsOption;
}

export function noiseTable({ title, times, timeUnit, replicates, values, standardErrors }: NoiseFigure): FigureTable {
  return {
    caption: `${title}, from ${countText(replicates)} replicates`,
    columns: [timeTitle(timeUnit), title, 'standard error'],
    rows: times.map((time, at) => [time, values[at]!, standardErrors[at]!]),
  };
}
