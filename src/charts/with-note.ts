/** A few words inside a figure, so that they go with it wherever it is downloaded or pasted: that its numbers are approximate. */
import type { EChartsOption } from 'echarts';
import type { ChartTheme } from './palette.ts';

export const approximateNote = 'tau-leaping, approximate';

/** The figure with `note` at its upper right corner. */
export const withNote = (option: EChartsOption, note: string, theme: ChartTheme): EChartsOption => ({
  ...option,
  title: {
    text: note,
    right: 8,
    top: 6,
    textStyle: { color: theme.methyl, fontFamily: theme.fontFamily, fontSize: 12, fontWeight: 600 },
  },
});
