/** What a figure is made of, wherever it is shown. */
import type { EChartsOption } from 'echarts';
import type { FigureTable } from '@/charts/figure-table.ts';
import type { ChartTheme } from '@/charts/palette.ts';

export interface FigureContent {
  /** In words, for somebody who does not see it: what is drawn, from how many replicates. */
  description: string;
  option: (theme: ChartTheme) => EChartsOption;
  /** Made when the table or the CSV is asked for. */
  table: () => FigureTable;
  /** Of the downloaded files, without ending. */
  fileStem: string;
  /** Lower, for the margin of a page. */
  compact?: boolean;
}
