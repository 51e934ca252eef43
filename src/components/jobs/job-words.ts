/** Sentences about jobs, the same on every page. */
import { creditsText, creditsUnit } from '@/components/ui/amounts-text.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { countText, numberText } from '@/charts/number-text.ts';
import type { Lane } from '@/domain/pricing/price-book.ts';

export const laneWords: Record<Lane, { label: string; hint: string }> = {
  steady: { label: 'Steady', hint: 'the normal queue' },
  express: { label: 'Express', hint: 'goes first, costs more' },
  overnight: { label: 'Overnight', hint: 'runs when nothing else waits, costs less' },
};

/** "1 credit per million events". */
export const rateText = (microcreditsPerMillionEvents: number): string =>
  `${creditsText(microcreditsPerMillionEvents)} ${creditsUnit(microcreditsPerMillionEvents)} per million events`;

export const isOver = ({ state }: Pick<JobDocument, 'state'>): boolean => state !== 'queued' && state !== 'running';

/** "48 h", or the bare number when the model names no unit. */
export const timeWithUnit = (time: number, unit: string | null | undefined): string =>
  unit ? `${numberText(time, 6)} ${unit}` : numberText(time, 6);

/** "exact method, direct kernel". */
export function methodWords({ method, epsilon, kernel }: Pick<JobDocument, 'method' | 'epsilon' | 'kernel'>): string {
  if (method === 'leap') return `tau-leaping, ε ${epsilon} (approximate)`;
  const words = 'exact method';
  return kernel === null ? words : `${words}, ${kernel} kernel`;
}

/** Digits in groups, so that a seed can be read out. */
export const seedText = (seed: string): string => seed.replaceAll(/\B(?=(\d{3})+$)/g, ' ');

export const overrideCount = ({ overrides }: Pick<JobDocument, 'overrides'>): number =>
  Object.keys(overrides.parameters ?? {}).length +
  Object.keys(overrides.initialCounts ?? {}).length +
  Object.keys(overrides.changeTimes ?? {}).length;

const failureKinds = {
  negative_propensity: 'a rate law became negative',
  not_a_number: 'a rate law gave no number',
  count_overflow: 'a count grew beyond 2,147,483,647',
  event_budget: 'a replicate ran over its event budget',
  bad_assignment: 'a change would have set a count that is no whole number, or a parameter that is no number',
  change_cascade: 'triggered changes set each other off without an end',
} as const;

/** What went wrong, where and when: "In replicate 18 at time 3.2 h, a rate law became negative (reaction decay)." */
export function failureWords({ failure, timeUnit }: Pick<JobDocument, 'failure' | 'timeUnit'>): string | null {
  if (failure === null) return null;
  const { kind, replicate, reaction, change, time } = failure;
  const where = change !== undefined ? ` (change ${change})` : reaction === null ? '' : ` (reaction ${reaction})`;
  return `In replicate ${countText(replicate)} at time ${timeWithUnit(time, timeUnit)}, ${failureKinds[kind]}${where}.`;
}

export const resultCaution =
  'These results depend on the model and its parameters. They are decision support, not evidence of safety or efficacy, and must not be used alone for dosing, clinical, environmental-release or process-safety decisions: those follow the local codes and the judgement of qualified, licensed practitioners.';
