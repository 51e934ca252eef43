import { describe, expect, it } from 'vitest';
import { FairTurns, type TurnCandidate } from './fair-turns.ts';

const candidate = (jobId: string, teamId: string, userId: string, lane: TurnCandidate['lane'] = 'steady') => ({
  jobId,
  teamId,
  userId,
  lane,
});

const serve = (turns: FairTurns, candidates: TurnCandidate[], times: number, work = 1): string[] =>
  Array.from({ length: times }, () => {
    const next = turns.next(candidates)!;
    turns.serve(next, work);
    return next.jobId;
  });

const count = (served: string[], jobId: string): number => served.filter((id) => id === jobId).length;

describe('FairTurns', () => {
  it('gives teams equal work, however many jobs each has', () => {
    const many = Array.from({ length: 9 }, (_, i) => candidate(`many${i}`, 'A', 'ann'));
    const served = serve(new FairTurns(), [...many, candidate('one', 'B', 'bob')], 100);
    expect(count(served, 'one')).toBe(50);
  });

  it('gives members of a team equal work, so that nobody waits for a colleague’s giant job', () => {
    const served = serve(new FairTurns(), [candidate('giant', 'A', 'ann'), candidate('small', 'A', 'amy')], 10);
    expect(count(served, 'small')).toBe(5);
  });

  it('weighs by work and not by turns', () => {
    const turns = new FairTurns();
    const [heavy, light] = [candidate('heavy', 'A', 'ann'), candidate('light', 'B', 'bob')];
    const work = { heavy: 0, light: 0 };
    for (let i = 0; i < 400; i++) {
      const next = turns.next([heavy, light])!;
      const amount = next === heavy ? 3 : 1;
      turns.serve(next, amount);
      work[next.jobId as 'heavy' | 'light'] += amount;
    }
    expect(Math.abs(work.heavy - work.light)).toBeLessThanOrEqual(3);
  });

  it('serves express before steady, and overnight only when nothing else waits', () => {
    const all = [
      candidate('o', 'A', 'ann', 'overnight'),
      candidate('s', 'B', 'bob'),
      candidate('e', 'C', 'cy', 'express'),
    ];
    const turns = new FairTurns();
    expect(serve(turns, all, 5)).toEqual(['e', 'e', 'e', 'e', 'e']);
    expect(serve(turns, all.slice(0, 2), 3)).toEqual(['s', 's', 's']);
    expect(serve(turns, all.slice(0, 1), 1)).toEqual(['o']);
  });

  it('lets nobody save up turns by idling', () => {
    const turns = new FairTurns();
    const [busy, back] = [candidate('busy', 'A', 'ann'), candidate('back', 'B', 'bob')];
    serve(turns, [busy], 1_000);
    const served = serve(turns, [busy, back], 20);
    expect(count(served, 'back')).toBeLessThanOrEqual(11);
    expect(count(served, 'busy')).toBeGreaterThanOrEqual(9);
  });

  it('takes the oldest job of a member first, and nothing where nobody waits', () => {
    expect(serve(new FairTurns(), [candidate('old', 'A', 'ann'), candidate('new', 'A', 'ann')], 3)).toEqual([
      'old',
      'old',
      'old',
    ]);
    expect(new FairTurns().next([])).toBeNull();
  });
});
