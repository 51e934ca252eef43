/** The report of a job, from what was computed. It tells nothing of money: it is made for the client. */
import { numberText, valueWithError } from '@/charts/number-text.ts';
import { gridTimes } from '@/domain/jobs/result-outputs.ts';
import { momentsAt, asSummary } from '@/engine/statistics/statistics-of.ts';
import { quantile } from '@/engine/statistics/quantile.ts';
import type { Report } from '@/formats/report/report.ts';
import { approximationText, caution, describeJob } from './archive-texts.ts';
import { namesOf, type Figure } from './figures.ts';
import type { ArchiveSubject, Results } from './subject.ts';

const rowsMost = 40;
const figuresMost = 12;

export function reportOf(options: {
  subject: ArchiveSubject;
  results: Results;
  resultsDigest: string;
  figures: Figure[];
}): Report {
  const { subject, results, resultsDigest, figures } = options;
  const { inputs } = subject.job;
  const { timeUnit } = subject.version.document;
  const times = gridTimes(inputs.horizon, inputs.gridIntervals);
  const last = times.length - 1;
  const summary = asSummary(results.ensemble.points[0]!.summary);
  const named = new Map(namesOf(subject).map(({ id, name }) => [id, name]));
  const rows = summary.observables.slice(0, rowsMost).map((id, observable) => {
    const { mean, sd, meanStandardError, sdStandardError } = momentsAt(summary, observable, last);
    const at = (probability: string) => numberText(quantile(summary, observable, last, probability), 4);
    const title = named.get(id);
    return [
      title && title !== id ? `${title} (${id})` : id,
      withError(mean, meanStandardError),
      withError(sd, sdStandardError),
      at('0.5'),
      `${at('0.05')} – ${at('0.95')}`,
    ];
  });
  const left = summary.observables.length - rows.length;
  const drawn = figures.filter(({ kind }) => kind !== 'traces').slice(0, figuresMost);
  return {
    title: subject.job.name,
    subtitle: `Report of an ensemble of ${results.ensemble.replicates.toLocaleString('en')} stochastic simulations`,
    date: subject.finishedAt,
    notices: inputs.method === 'exact' ? [] : [approximationText(inputs)],
    facts: [
      ...describeJob(subject, results).map(([label, value]) => ({ label, value })),
      { label: 'Finished', value: `${subject.finishedAt.slice(0, 16).replace('T', ' ')} UTC` },
      { label: 'Results digest', value: resultsDigest },
    ],
    table: {
      caption: `At the end: time ${numberText(times[last]!, 6)}${timeUnit ? ` ${timeUnit}` : ''}`,
      columns: ['Observable', 'Mean ± SE', 'SD ± SE', 'Median', '5 % – 95 %'],
      rows,
      note:
        'SE: standard error over replicates. ' +
        (left > 0
          ? `${left} further observables, and all times, are in results/summary.csv.`
          : 'All times are in results/summary.csv.'),
    },
    figures: drawn.map(({ svg, caption: text }) => ({ svg: svg(), caption: text })),
    caution,
  };
}

function withError(value: number, error: number): string {
  if (!Number.isFinite(error)) return numberText(value, 6);
  const rounded = valueWithError(value, error);
  return `${rounded.value} ± ${rounded.error}`;
}
