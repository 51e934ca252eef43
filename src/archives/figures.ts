/** The figures of an archive as SVG: each observable's time course, its distribution at the end, and its kept traces. */
import { distributionOption } from '@/charts/distribution-option.ts';
import { lightTheme } from '@/charts/palette.ts';
import { renderSvg } from '@/charts/render-svg.ts';
import { timeCourseOption } from '@/charts/time-course-option.ts';
import { approximateNote, withNote } from '@/charts/with-note.ts';
import { tracesOption } from '@/charts/traces-option.ts';
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { pointWords } from '@/domain/jobs/sweep.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { asSummary, statisticsOf } from '@/engine/statistics/statistics-of.ts';
import type { ArchiveSubject, Results } from './subject.ts';

export interface Figure {
  /** Inside the archive. */
  path: string;
  observable: string;
  kind: 'time course' | 'distribution' | 'traces';
  /** One sentence that says what is drawn. */
  caption: string;
  svg: () => string;
}

/** More are not drawn: the tables have them all. */
const observablesMost = 20;
/** More are no longer told apart. */
const tracesMost = 20;
export const figureSize = { widthPx: 720, heightPx: 380 };

export function figuresOf(subject: ArchiveSubject, results: Results): Figure[] {
  const { inputs } = subject.job;
  const { timeUnit } = subject.version.document;
  const [point] = results.ensemble.points;
  const summary = asSummary(point!.summary);
  const times = gridTimes(inputs.horizon, inputs.gridIntervals);
  const { observables, replicates } = statisticsOf(summary, times);
  const named = new Map(namesOf(subject).map(({ id, name }) => [id, name]));
  const { sweep, method } = inputs;
  const from = [
    `from ${replicates.toLocaleString('en')} replicates`,
    method === 'exact' ? '' : ' of tau-leaping (approximate)',
    sweep ? ` at point 0 (${pointWords(sweep, 0)})` : '',
  ].join('');
  return observables.slice(0, observablesMost).flatMap((estimates, place): Figure[] => {
    const { id } = estimates;
    const title = named.get(id) || id;
    const observable = { ...estimates, name: title };
    const traces = point!.traces.slice(0, tracesMost).map(({ replicate, values }) => ({
      replicate,
      values: Array.from(values.subarray(place * times.length, (place + 1) * times.length)),
    }));
    // The archive and its report show the same picture, drawn once.
    const drawn = (option: Parameters<typeof renderSvg>[0]) => {
      let svg: string | undefined;
      const shown = inputs.method === 'exact' ? option : withNote(option, approximateNote, lightTheme);
      return () => (svg ??= tidy(renderSvg(shown, { ...figureSize, theme: lightTheme })));
    };
    const isCount = summary.shape.observables[place]!.kind === 'count';
    const end = times.at(-1)!;
    const timeCourse = { times, timeUnit, observable, replicates, fan: true, traces: [] };
    const distribution = isCount ? distributionOf(summary, id, times.length - 1) : null;
    return [
      {
        path: `figures/${id}-time-course.svg`,
        observable: id,
        kind: 'time course',
        caption: `${title}: mean with its standard error, and the bands between the 25 and 75 % and the 5 and 95 % quantiles, ${from}.`,
        svg: drawn(timeCourseOption(timeCourse, lightTheme)),
      },
      ...(distribution
        ? [
            {
              path: `figures/${id}-distribution.svg`,
              observable: id,
              kind: 'distribution' as const,
              caption: `${title} at ${end}${timeUnit ? ` ${timeUnit}` : ''}: probability of each count with its 95 % interval (Wilson), ${from}.`,
              svg: drawn(
                distributionOption(
                  { title, time: end, timeUnit, distribution, mean: estimates.mean.at(-1) },
                  lightTheme,
                ),
              ),
            },
          ]
        : []),
      ...(traces.length > 0
        ? [
            {
              path: `figures/${id}-traces.svg`,
              observable: id,
              kind: 'traces' as const,
              caption: `${title}: the first ${traces.length} replicates${inputs.method === 'exact' ? '' : ' of tau-leaping (approximate)'}, one of them picked out.`,
              svg: drawn(
                tracesOption({ title, times, timeUnit, traces, highlighted: traces[0]!.replicate }, lightTheme),
              ),
            },
          ]
        : []),
    ];
  });
}

/** Species and observables in the order of results, with their names. */
export const namesOf = ({ version }: ArchiveSubject): { id: string; name?: string | undefined }[] => [
  ...version.document.species,
  ...(version.document.observables ?? []),
];

/** Leaves out what only a page needs, and the numbers that the renderer counts through the life of the process. */
const tidy = (svg: string): string =>
  svg
    .replaceAll(/<style[^>]*>[\s\S]*?<\/style>/g, '')
    .replaceAll(/ (class|ecmeta_[a-z_]+|pointer-events|xmlns:xlink)="[^"]*"/g, '')
    .replaceAll(/zr\d+-/g, 'z-');
