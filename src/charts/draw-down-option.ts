/** The month's use of credits against its budget, day by day, and what project codes have used. */
import type { EChartsOption } from 'echarts';
import type { BudgetsDocument, ProjectCodeUse } from '@/contracts/budgets.ts';
import type { FigureTable } from './figure-table.ts';
import { frame, labelSeries } from './frame.ts';
import { numberText } from './number-text.ts';
import type { ChartTheme } from './palette.ts';

const credits = (microcredits: number): number => microcredits / 1_000_000;

/** What had been used by the end of each day of the month, up to the last day with a launch. */
function runningUse({ days }: BudgetsDocument): { day: number; used: number }[] {
  let used = 0;
  return [
    { day: 0, used: 0 },
    ...days.map(({ day, usedMicrocredits }) => {
      used += usedMicrocredits;
      return { day: Number(day.slice(8)), used: credits(used) };
    }),
  ];
}

export function drawDownOption(budgets: BudgetsDocument, theme: ChartTheme): EChartsOption {
  const points = runningUse(budgets);
  const last = points.at(-1)!;
  const budget = budgets.monthlyMicrocredits === null ? null : credits(budgets.monthlyMicrocredits);
  const base = frame(theme, {
    x: { title: 'day of the month', min: 0, max: budgets.daysInMonth },
    y: { title: 'credits, spent and held', min: 0 },
    labels: true,
  });
  const line = (name: string, color: string, data: number[][], more: object) => ({
    type: 'line',
    name,
    showSymbol: false,
    lineStyle: { color, width: 2, ...more },
    itemStyle: { color },
    data,
  });
  const [bromo, methyl] = [theme.series[0]!, theme.series[1]!];
  return {
    ...base,
    series: [
      {
        ...line(
          'used',
          bromo,
          points.map(({ day, used }) => [day, used]),
          {},
        ),
        step: 'end',
        areaStyle: { color: bromo, opacity: 0.15 },
      },
      ...(budget === null
        ? []
        : [
            line(
              'budget',
              methyl,
              [
                [0, budget],
                [budgets.daysInMonth, budget],
              ],
              { type: 'dashed' },
            ),
          ]),
      labelSeries(
        [
          { x: last.day, y: last.used, text: `${numberText(last.used, 4)} used`, color: bromo },
          ...(budget === null
            ? []
            : [{ x: budgets.daysInMonth, y: budget, text: `budget ${numberText(budget, 4)}`, color: methyl }]),
        ],
        theme,
      ),
    ],
  } as EChartsOption;
}

export const drawDownTable = (budgets: BudgetsDocument): FigureTable => ({
  caption: `Credits used by the end of each day of ${budgets.month}`,
  columns: ['day', 'credits spent and held'],
  rows: runningUse(budgets)
    .slice(1)
    .map(({ day, used }) => [day, used]),
});

/** The most used first, the rest in the table. */
const barsShown = 12;

const used = (codes: readonly ProjectCodeUse[]): ProjectCodeUse[] =>
  [...codes]
    .filter(({ usedMicrocredits, monthlyMicrocredits }) => usedMicrocredits > 0 || monthlyMicrocredits !== null)
    .sort((one, other) => other.usedMicrocredits - one.usedMicrocredits);

export function projectSpendOption(codes: readonly ProjectCodeUse[], theme: ChartTheme): EChartsOption {
  const shown = used(codes).slice(0, barsShown).reverse();
  const base = frame(theme, {
    x: { title: 'credits, spent and held this month', min: 0 },
    y: { title: '' },
    labels: false,
  });
  const [bromo, methyl] = [theme.series[0]!, theme.series[1]!];
  return {
    ...base,
    grid: { ...base.grid, right: 64 },
    yAxis: {
      ...base.yAxis,
      type: 'category',
      data: shown.map(({ code }) => code),
      axisLabel: { color: theme.ink, fontFamily: theme.fontFamily },
    },
    series: [
      {
        type: 'bar',
        name: 'used',
        barMaxWidth: 22,
        itemStyle: { color: bromo },
        label: {
          show: true,
          position: 'right',
          color: theme.ink,
          fontFamily: theme.fontFamily,
          formatter: ({ value }: { value: number }) => numberText(value, 4),
        },
        data: shown.map(({ usedMicrocredits }) => credits(usedMicrocredits)),
      },
      {
        type: 'scatter',
        name: 'budget',
        symbol: 'rect',
        symbolSize: [3, 26],
        itemStyle: { color: methyl },
        data: shown.flatMap(({ monthlyMicrocredits, code }) =>
          monthlyMicrocredits === null ? [] : [[credits(monthlyMicrocredits), code]],
        ),
      },
    ],
  } as EChartsOption;
}

export const projectSpendTable = (codes: readonly ProjectCodeUse[]): FigureTable => ({
  caption: 'Credits used this month by project code',
  columns: ['project code', 'credits spent and held', 'budget'],
  rows: used(codes).map(({ code, usedMicrocredits, monthlyMicrocredits }) => [
    code,
    credits(usedMicrocredits),
    monthlyMicrocredits === null ? 'none' : credits(monthlyMicrocredits),
  ]),
});
