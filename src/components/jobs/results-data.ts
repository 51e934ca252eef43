/** What the results' tabs share: the statistics as numbers, the traces of one observable. */
import type { StatisticsDocument } from '@/contracts/jobs.ts';
import type { EnsembleStatistics } from '@/engine/ensemble.ts';

export type NamedObservable = EnsembleStatistics['observables'][number] & { name?: string | undefined };

export interface Results {
  replicates: number;
  times: number[];
  timeUnit: string | undefined;
  observables: NamedObservable[];
  events: StatisticsDocument['events'];
}

export interface ObservableTrace {
  replicate: number;
  values: readonly number[];
}

/** JSON has no NaN: what so few replicates cannot give comes as null. */
const numbers = (values: (number | null)[]): number[] => values.map((value) => value ?? NaN);

export function resultsOf(
  statistics: StatisticsDocument,
  names: Record<string, string>,
  timeUnit: string | null,
): Results {
  return {
    replicates: statistics.replicates,
    times: statistics.times,
    timeUnit: timeUnit ?? undefined,
    observables: statistics.observables.map((observable) => ({
      ...observable,
      name: names[observable.id],
      sd: numbers(observable.sd),
      meanStandardError: numbers(observable.meanStandardError),
      sdStandardError: numbers(observable.sdStandardError),
      fano: numbers(observable.fano),
      fanoStandardError: numbers(observable.fanoStandardError),
      cv: numbers(observable.cv),
      cvStandardError: numbers(observable.cvStandardError),
    })),
    events: statistics.events,
  };
}
