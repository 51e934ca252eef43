/**
 * Conserved totals: weighted sums of counts that no reaction alters, of species that no timed or triggered change sets, as
 * integer vectors of the left null space of the stoichiometry matrix, found exactly by fraction-free elimination.
 */
import type { ResolvedNetwork } from './resolved.ts';

/** Σ weight · count over `terms` is the same after every firing and change. Species of weight 0 are left out. */
export interface ConservedTotal {
  terms: { species: number; weight: bigint }[];
  /** Its value in the initial state. */
  total: bigint;
}

type SparseRow = Map<number, bigint>;
interface Row {
  /** Net change of this combination of species per firing, by reaction; then by species that is set. */
  changes: SparseRow;
  /** The combination, by species. */
  weights: SparseRow;
}

/** Elimination steps (entries touched) after which a large, dense network is given up: about a second. */
const workLimit = 3_000_000;

/**
 * A basis of all conserved totals of the non-boundary species, small weights and no negative ones where a few sums
 * reach that; null when the network is too large and tangled to find them quickly.
 */
export function conservedTotals(network: ResolvedNetwork): ConservedTotal[] | null {
  const rows = network.species.map((_, species): Row => ({ changes: new Map(), weights: new Map([[species, 1n]]) }));
  network.reactions.forEach(({ changes }, reaction) => {
    for (const { species, count } of changes) rows[species]!.changes.set(reaction, BigInt(count));
  });
  // A column of its own keeps a species that is set out of every total, and the others' totals in.
  for (const { target } of (network.changes ?? []).flatMap(({ sets }) => sets))
    if (target.kind === 'species') rows[target.index]!.changes.set(network.reactions.length + target.index, 1n);
  const free = rows.filter((_, species) => !network.species[species]!.boundary);
  const basis = leftNullSpace(free);
  if (basis === null) return null;
  return withoutNegatives(basis).map((weights) => ({
    terms: [...weights].sort(([a], [b]) => a - b).map(([species, weight]) => ({ species, weight })),
    total: [...weights].reduce(
      (sum, [species, weight]) => sum + weight * BigInt(network.species[species]!.initialCount),
      0n,
    ),
  }));
}

/** Rows are combined until each is empty or leads in a reaction of its own; the empty ones are conserved. */
function leftNullSpace(rows: Row[]): SparseRow[] | null {
  const leaders = new Map<number, Row>();
  const basis: SparseRow[] = [];
  let work = 0;
  // Short rows first keep the fill-in of long chains down.
  for (const row of [...rows].sort((a, b) => a.changes.size - b.changes.size)) {
    let current = row;
    for (;;) {
      const pivot = [...current.changes.keys()].find((reaction) => leaders.has(reaction));
      if (pivot === undefined) break;
      current = eliminate(current, leaders.get(pivot)!, pivot);
      work += current.changes.size + current.weights.size;
      if (work > workLimit) return null;
    }
    const lead = [...current.changes.keys()][0];
    if (lead === undefined) basis.push(current.weights);
    else leaders.set(lead, current);
  }
  return basis.map(normalised);
}

/** row · a − leader · b, scaled so that the entry at `pivot` vanishes, divided by the common factor of all entries. */
function eliminate(row: Row, leader: Row, pivot: number): Row {
  const own = row.changes.get(pivot)!;
  const other = leader.changes.get(pivot)!;
  const common = greatestCommonDivisor(own, other);
  const [scale, factor] = [other / common, -own / common];
  const changes = combined(row.changes, scale, leader.changes, factor);
  const weights = combined(row.weights, scale, leader.weights, factor);
  const divisor = [...changes.values(), ...weights.values()].reduce(greatestCommonDivisor, 0n);
  return divisor <= 1n
    ? { changes, weights }
    : { changes: divided(changes, divisor), weights: divided(weights, divisor) };
}

function combined(a: SparseRow, scaleA: bigint, b: SparseRow, scaleB: bigint): SparseRow {
  const sum: SparseRow = new Map();
  for (const [key, value] of a) sum.set(key, value * scaleA);
  for (const [key, value] of b) {
    const entry = (sum.get(key) ?? 0n) + value * scaleB;
    if (entry === 0n) sum.delete(key);
    else sum.set(key, entry);
  }
  return sum;
}

const divided = (row: SparseRow, divisor: bigint): SparseRow =>
  new Map([...row].map(([key, value]) => [key, value / divisor]));

function greatestCommonDivisor(a: bigint, b: bigint): bigint {
  [a, b] = [a < 0n ? -a : a, b < 0n ? -b : b];
  while (b !== 0n) [a, b] = [b, a % b];
  return a;
}

/** Coprime weights, most of them positive. */
function normalised(weights: SparseRow): SparseRow {
  const divisor = [...weights.values()].reduce(greatestCommonDivisor, 0n);
  const negative = [...weights.values()].filter((weight) => weight < 0n).length;
  return divided(weights, negative * 2 > weights.size ? -divisor : divisor);
}

const isNonNegative = (weights: SparseRow): boolean => [...weights.values()].every((weight) => weight > 0n);

/** Beyond this many totals the prettier forms are not looked for. */
const totalsMended = 60;

/**
 * Replaces totals with negative weights by sums and differences with other totals that have none, where two are enough;
 * that changes the basis but not what it spans.
 */
function withoutNegatives(basis: SparseRow[]): SparseRow[] {
  const result = [...basis];
  if (basis.length > totalsMended) return result;
  for (let round = 0; round < 3; round++) {
    for (let index = 0; index < result.length; index++) {
      if (isNonNegative(result[index]!)) continue;
      const others = result.filter((_, other) => other !== index);
      result[index] = shortest(others.flatMap((other) => combinations(result[index]!, other))) ?? result[index]!;
    }
  }
  return result;
}

/** Every combination of two totals in which one of their common species cancels, without negative weights. */
function combinations(own: SparseRow, other: SparseRow): SparseRow[] {
  return [...own].flatMap(([species, weight]) => {
    const otherWeight = other.get(species);
    if (otherWeight === undefined) return [];
    const sum = normalised(combined(own, otherWeight, other, -weight));
    return isNonNegative(sum) ? [sum] : [];
  });
}

const shortest = (rows: SparseRow[]): SparseRow | undefined => rows.sort((a, b) => a.size - b.size)[0];
