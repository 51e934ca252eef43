/** Draws the front page's figure as plain SVG in the page's own colours; every stroke is named beside it. */
import { countText } from '@/components/ui/amounts-text.ts';
import { wilsonInterval } from '@/engine/statistics/wilson.ts';
import type { WardFigure } from './compute-ward-figure.ts';

const width = 700;
const height = 340;
const margin = { left: 34, right: 10, top: 26, bottom: 40 };
const mostInfectious = 16;
const text = 'text-[22px] sm:text-[14px]';

export function WardFigureView({ figure }: { figure: WardFigure }) {
  const lastDay = figure.days.at(-1)!;
  const x = (day: number): number => margin.left + ((width - margin.left - margin.right) * day) / lastDay;
  const y = (people: number): number =>
    height - margin.bottom - ((height - margin.top - margin.bottom) * people) / mostInfectious;
  const point = (day: number, people: number): string => `${x(day).toFixed(1)} ${y(people).toFixed(1)}`;
  const line = (values: readonly number[]): string =>
    `M${values.map((value, index) => point(figure.days[index]!, value)).join('L')}`;
  /** Counts jump; between grid times they stay. */
  const steps = (values: readonly number[]): string =>
    `M${values.map((value, index) => `${point(figure.days[index]!, value)}H${x(figure.days[Math.min(index + 1, values.length - 1)]!).toFixed(1)}`).join('L')}`;
  const band = `${line(figure.high)}L${[...figure.low]
    .map((value, index) => point(figure.days[index]!, value))
    .reverse()
    .join('L')}Z`;
  const share = wilsonInterval(figure.smallOutbreaks, figure.replicates);
  const percent = (value: number): string => (100 * value).toFixed(1);

  return (
    <figure>
      <svg
        viewBox={`0 0 ${width} ${height}`}
        className="w-full"
        role="img"
        aria-label={`Infectious people on a ward of 28 beds over ${lastDay} days, from ${countText(figure.replicates)} replicates: the mean peaks near ${Math.max(...figure.mean).toFixed(1)}, the rate equations near ${Math.max(...figure.meanField).toFixed(1)}.`}
      >
        {[0, 4, 8, 12, 16].map((people) => (
          <g key={people}>
            <line x1={margin.left} x2={width - margin.right} y1={y(people)} y2={y(people)} className="stroke-rule" />
            <text x={margin.left - 8} y={y(people)} dy="0.35em" textAnchor="end" className={`fill-soft ${text}`}>
              {people}
            </text>
          </g>
        ))}
        {[0, 20, 40, 60].map((day) => (
          <text
            key={day}
            x={x(day)}
            y={height - margin.bottom + 24}
            textAnchor={day === lastDay ? 'end' : 'middle'}
            className={`fill-soft ${text}`}
          >
            {day === lastDay ? `${day} days` : day}
          </text>
        ))}
        <text x={0} y={14} className={`fill-soft ${text}`}>
          Infectious people
        </text>
        <path d={band} className="fill-bromo" fillOpacity="0.16" />
        {figure.traces.map((trace, index) => (
          <path key={index} d={steps(trace)} className="fill-none stroke-bromo" strokeOpacity="0.4" strokeWidth="1" />
        ))}
        <path d={line(figure.meanField)} className="fill-none stroke-methyl" strokeWidth="2.4" strokeDasharray="7 5" />
        <path d={line(figure.mean)} className="fill-none stroke-bromo" strokeWidth="2.8" />
        <text x={x(31)} y={y(9.6)} className={`fill-bromo font-semibold ${text}`}>
          5–95 % of replicates
        </text>
        <text x={x(31)} y={y(7.6)} className={`fill-methyl font-semibold ${text}`}>
          rate equations (dashed)
        </text>
        <text x={x(31)} y={y(5.6)} className={`fill-bromo font-semibold ${text}`}>
          mean (heavy), nine traces
        </text>
      </svg>
      <figcaption className="mt-2 max-w-prose text-sm text-soft">
        An invented ward of 28 beds with two infectious people, {countText(figure.replicates)} exact replicates. In{' '}
        <b className="font-semibold text-ink">
          {percent(figure.smallOutbreaks / figure.replicates)} % ({percent(share.lower)} to {percent(share.upper)} %)
        </b>{' '}
        of them at most three more people are infected; the rate equations show an outbreak every time. Computed by the
        engine that runs jobs, from seed {figure.seed}.
      </figcaption>
    </figure>
  );
}
