/**
 * Which assigned parameters and propensities a firing can alter: those that read a species it changes, directly or through
 * assigned parameters.
 */
import type { PreparedNetwork, Term } from './prepared-network.ts';

export interface DependencyGraph {
  /** By reaction: the assigned parameters to work out anew after its firing, in their order. */
  assigned: readonly (readonly number[])[];
  /**
   * By reaction: lists of the reactions whose propensities are worked out anew, one list after the other. Lists are shared
   * between reactions, so that a species that everything reads does not make the graph quadratic; a reaction may stand in
   * several lists, and one whose propensity stays the same is harmless.
   */
  reactions: readonly (readonly (readonly number[])[])[];
}

/** A firing that alters more assigned parameters than this is taken to alter everything. */
const mostAssigned = 256;
/** Up to so many readers are made one list of a reaction's own, in the order of the reactions. */
export const mostInOwnList = 64;

interface Reads {
  places: Set<number>;
  assigned: Set<number>;
}

const noReads = (): Reads => ({ places: new Set(), assigned: new Set() });

function collect(term: Term, reads: Reads): void {
  switch (term.kind) {
    case 'species':
      reads.places.add(term.index);
      return;
    case 'assigned':
      reads.assigned.add(term.index);
      return;
    case 'unary':
      return collect(term.operand, reads);
    case 'binary':
      collect(term.left, reads);
      return collect(term.right, reads);
    case 'call':
      return term.arguments.forEach((argument) => collect(argument, reads));
    case 'piecewise':
      term.pieces.forEach(({ value, condition }) => {
        collect(value, reads);
        collect(condition, reads);
      });
      return collect(term.otherwise, reads);
  }
}

function readsOfReaction({ law }: PreparedNetwork['reactions'][number]): Reads {
  const reads = noReads();
  if (law.kind === 'massAction') {
    collect(law.factor, reads);
    for (const { species } of law.orders) reads.places.add(species);
  } else {
    collect(law.value, reads);
    for (const { species } of law.guards) reads.places.add(species);
  }
  return reads;
}

/** Who reads what, by what is read; readers in their order. */
class Readers {
  readonly ofPlace: number[][];
  readonly ofAssigned: number[][];

  constructor(prepared: PreparedNetwork, reads: Reads[]) {
    this.ofPlace = Array.from({ length: prepared.stateSize }, () => []);
    this.ofAssigned = prepared.assigned.map(() => []);
    reads.forEach(({ places, assigned }, reader) => {
      for (const place of places) this.ofPlace[place]!.push(reader);
      for (const index of assigned) this.ofAssigned[index]!.push(reader);
    });
  }
}

export function dependencyGraph(prepared: PreparedNetwork): DependencyGraph {
  const rules = new Readers(
    prepared,
    prepared.assigned.map((term) => {
      const reads = noReads();
      collect(term, reads);
      return reads;
    }),
  );
  const laws = new Readers(prepared, prepared.reactions.map(readsOfReaction));
  const everyRule = prepared.assigned.map((_, index) => index);
  const everyReaction = prepared.reactions.map((_, index) => index);
  const assigned: (readonly number[])[] = [];
  const reactions: (readonly (readonly number[])[])[] = [];
  for (const { changes } of prepared.reactions) {
    const places = changes.map(({ species }) => species);
    const altered = alteredRules(rules, places);
    if (altered === null) {
      assigned.push(everyRule);
      reactions.push([everyReaction]);
      continue;
    }
    const lists = [
      ...places.map((place) => laws.ofPlace[place]!),
      ...altered.map((index) => laws.ofAssigned[index]!),
    ].filter(({ length }) => length > 0);
    assigned.push(altered);
    reactions.push(lists.length > 1 && sizeOf(lists) <= mostInOwnList ? [union(lists)] : lists);
  }
  return { assigned, reactions };
}

/** The assigned parameters that read one of the places, directly or through others, in order; null for too many. */
function alteredRules(rules: Readers, places: number[]): number[] | null {
  const altered = new Set<number>();
  const waiting = places.map((place) => rules.ofPlace[place]!);
  for (let list = waiting.pop(); list; list = waiting.pop()) {
    for (const index of list) {
      if (altered.has(index)) continue;
      if (altered.size === mostAssigned) return null;
      altered.add(index);
      waiting.push(rules.ofAssigned[index]!);
    }
  }
  return [...altered].sort((a, b) => a - b);
}

const sizeOf = (lists: readonly number[][]): number => lists.reduce((sum, { length }) => sum + length, 0);

const union = (lists: readonly number[][]): number[] => [...new Set(lists.flat())].sort((a, b) => a - b);
