/**
 * Whose batch runs next: lanes in order, then teams by turns, then members of the team by turns, then the oldest job.
 *
 * Start-time fair queueing (Goyal, Vin & Cheng 1996): each team and member has a virtual time that grows by the work
 * given to it; the one furthest behind is next. Somebody who comes back from idling starts at the present virtual
 * time, so nobody saves up turns, and nobody waits for a giant job of a colleague.
 */
import type { Lane } from '../pricing/price-book.ts';

export interface TurnCandidate {
  jobId: string;
  teamId: string;
  userId: string;
  lane: Lane;
}

const laneOrder: Lane[] = ['express', 'steady', 'overnight'];

class VirtualTimes {
  readonly #times = new Map<string, number>();
  #now = 0;

  furthestBehind(keys: Iterable<string>): string {
    let chosen: string | null = null;
    for (const key of keys) if (chosen === null || this.#of(key) < this.#of(chosen)) chosen = key;
    if (chosen === null) throw new Error('Nobody is waiting.');
    return chosen;
  }

  serve(key: string, work: number): void {
    const start = this.#of(key);
    this.#now = start;
    this.#times.set(key, start + work);
  }

  #of(key: string): number {
    return Math.max(this.#times.get(key) ?? 0, this.#now);
  }
}

export class FairTurns {
  readonly #teams = new VirtualTimes();
  readonly #members = new Map<string, VirtualTimes>();

  /** The candidate to serve next, or null when there is none. Candidates stand in order of launch. */
  next<C extends TurnCandidate>(candidates: readonly C[]): C | null {
    const lane = laneOrder.find((name) => candidates.some((candidate) => candidate.lane === name));
    const inLane = candidates.filter((candidate) => candidate.lane === lane);
    if (inLane.length === 0) return null;
    const teamId = this.#teams.furthestBehind(inLane.map((candidate) => candidate.teamId));
    const ofTeam = inLane.filter((candidate) => candidate.teamId === teamId);
    const userId = this.#membersOf(teamId).furthestBehind(ofTeam.map((candidate) => candidate.userId));
    return ofTeam.find((candidate) => candidate.userId === userId) ?? null;
  }

  /** Records the work (worker seconds, expected) given to a candidate. */
  serve(candidate: TurnCandidate, work: number): void {
    this.#teams.serve(candidate.teamId, work);
    this.#membersOf(candidate.teamId).serve(candidate.userId, work);
  }

  #membersOf(teamId: string): VirtualTimes {
    const present = this.#members.get(teamId);
    if (present) return present;
    const created = new VirtualTimes();
    this.#members.set(teamId, created);
    return created;
  }
}
