/** Adds the spending of segments up by project code, member or lane, the largest first. */
import type { Spending } from '@/contracts/statements.ts';
import type { SegmentSpending } from './spent-by-segment.ts';

export function sumSpending(
  segments: readonly SegmentSpending[],
  keyOf: (segment: SegmentSpending) => { id: string | null; name: string },
): Spending[] {
  const sums = new Map<string | null, { name: string; spent: number; jobs: Set<string> }>();
  for (const segment of segments) {
    const { id, name } = keyOf(segment);
    const sum = sums.get(id) ?? { name, spent: 0, jobs: new Set() };
    sum.spent += segment.spentMicrocredits;
    sum.jobs.add(segment.jobId);
    sums.set(id, sum);
  }
  return [...sums]
    .map(([id, { name, spent, jobs }]) => ({ id, name, spentMicrocredits: spent, jobs: jobs.size }))
    .sort((one, other) => other.spentMicrocredits - one.spentMicrocredits || one.name.localeCompare(other.name, 'en'));
}

export const byProjectCode = ({ projectCodeId, projectCode }: SegmentSpending) => ({
  id: projectCodeId,
  name: projectCode ?? 'No project code',
});
export const byMember = ({ userId, member }: SegmentSpending) => ({ id: userId, name: member ?? 'Unknown' });
export const byLane = ({ lane }: SegmentSpending) => ({
  id: lane,
  name: lane ? `${lane[0]!.toUpperCase()}${lane.slice(1)}` : 'Unknown',
});
