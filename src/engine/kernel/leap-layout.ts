/** Where the leaping kernel keeps its tables, one f64 a place; they follow the network's structure. */
import { structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';

export interface LeapLayout {
  /** Assigned parameters. */
  assigned: number;
  /** By reaction: propensities, those of reactions that leap and of critical ones (0 for the others), numbers of firings. */
  propensities: number;
  leaping: number;
  critical: number;
  firings: number;
  firingsEnd: number;
  /** By place of the state: what the leap under way would make of it, and what it was before the last leap. */
  next: number;
  previous: number;
  /** Total propensity, of reactions that leap, of critical ones. */
  total: number;
  leapingTotal: number;
  criticalTotal: number;
  end: number;
}

export function leapLayout(prepared: PreparedNetwork): LeapLayout {
  const reactions = 8 * prepared.reactions.length;
  const assigned = structureLayout(prepared).end;
  const propensities = assigned + 8 * prepared.assigned.length;
  const leaping = propensities + reactions;
  const critical = leaping + reactions;
  const firings = critical + reactions;
  const next = firings + reactions;
  const previous = next + 8 * prepared.stateSize;
  const total = previous + 8 * prepared.stateSize;
  return {
    assigned,
    propensities,
    leaping,
    critical,
    firings,
    firingsEnd: next,
    next,
    previous,
    total,
    leapingTotal: total + 8,
    criticalTotal: total + 16,
    end: total + 24,
  };
}
