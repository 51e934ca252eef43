/** One cell of the table of speed and size that the bench prints. */

export interface BenchRow {
  measure:
    | 'events-vs-hand-c'
    | 'events-vs-generic-c'
    | 'large-network-vs-c'
    | 'cost-growth-100-to-10000'
    | 'two-workers'
    | 'cold-start-ms';
  network: string;
  value: number;
  unit: string;
  baseline: string;
  baselineValue: number | null;
  /** value / baselineValue; null where there is no baseline and the value itself is judged. */
  ratio: number | null;
  atLeast: number;
  aim: number;
}

export const median = (values: number[]): number => [...values].sort((a, b) => a - b)[values.length >> 1]!;
