/** A figure as SVG text, without a page: for downloads, archives, reports and tests. */
import type { EChartsOption } from 'echarts';
import { echarts } from './echarts-modules.ts';
import type { ChartTheme } from './palette.ts';

/** `widthPx` × `heightPx`; the background is the theme's panel so that the picture stands on its own. */
export function renderSvg(
  option: EChartsOption,
  size: { widthPx: number; heightPx: number; theme: ChartTheme },
): string {
  const chart = echarts.init(null, null, { renderer: 'svg', ssr: true, width: size.widthPx, height: size.heightPx });
  try {
    chart.setOption({ ...option, backgroundColor: size.theme.panel });
    return chart.renderToSVGString();
  } finally {
    chart.dispose();
  }
}
