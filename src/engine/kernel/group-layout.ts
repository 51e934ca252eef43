/**
 * The tables of the composition-rejection kernel in memory, after what every kernel has there (memory-layout.ts): the network's
 * reactions and their dependency graph, and the groups of one replicate. Addresses are bytes; numbers are i32 unless f64 is said.
 */
import type { PointTask } from '../replicate-group.ts';
import { dependencyGraph, mostInOwnList } from './dependency-graph.ts';
import { structureLayout } from './memory-layout.ts';
import type { PreparedNetwork, PreparedReaction } from './prepared-network.ts';

/** A reaction as its propensity is worked out and its group found. */
export const record = {
  /** f64: the constant of mass action, factorials included. */
  factor: 0,
  /** f64: the rounded propensity. */
  propensity: 8,
  /** By kind, which stands in the last bits of the first: two addresses of counts; begin and end of orders; number of a function. */
  first: 16,
  second: 20,
  /** Address of the place in its group's list; meaningless for a propensity of 0. */
  member: 24,
  /** Address of what firing it does. */
  firing: 28,
  /** Room for a short firing, so that it lies beside what chooses it. */
  ownFiring: 32,
  bytes: 96,
} as const;

/**
 * Kinds of law. The first two are factor · first · (second − kind): up to two reactants, a 1 standing for the missing ones.
 * `orders` is mass action of any order, `function` everything else.
 */
export const lawKind = { product: 0, pairs: 1, orders: 2, function: 3, bits: 3 } as const;
/** A function's number is shifted to make room for the kind. */
export const functionShift = 3;

/**
 * What firing a reaction does. Its changes follow it in memory, and then its own list of records to refresh, so that both mostly
 * lie in one line of the cache; lists shared between reactions stand elsewhere.
 */
export const firing = {
  changesEnd: 0,
  ownListEnd: 4,
  /** Begin and end of the table of shared lists, and of the list of assigned parameters. */
  lists: 8,
  listsEnd: 12,
  assigned: 16,
  assignedEnd: 20,
  changes: 24,
} as const;

/** Change, and the address of the count. */
export const change = { count: 0, place: 4, bytes: 8 } as const;
/** Address of a count and its order. */
export const order = { place: 0, count: 4, bytes: 8 } as const;
/** Begin and end of a list of addresses of records. */
export const list = { begin: 0, end: 4, bytes: 8 } as const;

/** A group, by the exponent field of its members' propensities. */
export const group = {
  /** f64 */
  sum: 0,
  /** f64: all members are below it and at least half of it. */
  bound: 8,
  size: 16,
  /** Address of its table of pages. */
  pages: 20,
  bytes: 32,
} as const;
export const groupCount = 2048;
/** Lists of members are kept in pages of so many addresses of records, as a power of two. */
export const pageShift = 6;
const pageBytes = 4 << pageShift;

export interface GroupLayout {
  /** f64 1. */
  one: number;
  /** f64 values of the assigned parameters. */
  assigned: number;
  records: number;
  /** A firing that stands for a change that may alter everything. */
  everything: number;
  groups: number;
  /** Addresses of the groups that have members, from the largest exponent down, and how many. */
  active: number;
  activeCount: number;
  /** A stack of free pages, and how many. */
  freePages: number;
  freeCount: number;
  pages: number;
  pageCount: number;
  /** Addresses of the count observables' counts. */
  observables: number;
  /** Functions that the table of the module holds: assigned parameters first, then laws, then real observables. */
  lawFunctions: number[];
  realFunctions: number;
  end: number;
}

interface Tables {
  layout: GroupLayout;
  write(memory: WebAssembly.Memory, task: PointTask): void;
}

/** Whether a reaction's law is mass action with a constant of the point, so that tables can hold it. */
const inTables = ({ law }: PreparedReaction): boolean =>
  law.kind === 'massAction' && (law.factor.kind === 'number' || law.factor.kind === 'constant');

export function groupTables(prepared: PreparedNetwork): Tables {
  const { reactions } = prepared;
  const structure = structureLayout(prepared);
  const graph = dependencyGraph(prepared);
  const place = (species: number): number => structure.savedState + 8 * species;

  let end = Math.ceil(structure.end / 64) * 64;
  const take = (bytes: number): number => {
    const at = end;
    end += Math.ceil(bytes / 8) * 8;
    return at;
  };
  const lawFunctions = reactions.flatMap((reaction, index) => (inTables(reaction) ? [] : [index]));
  const pagesPerGroup = Math.ceil(reactions.length / 2 ** pageShift);
  const pageCount = pagesPerGroup + Math.min(reactions.length, groupCount);

  const records = take(record.bytes * reactions.length);
  const one = take(8);
  const assigned = take(8 * prepared.assigned.length);
  const groups = take(group.bytes * groupCount);
  const active = take(4 * groupCount);
  const activeCount = take(4);
  const freeCount = take(4);
  const freePages = take(4 * pageCount);
  const pages = take(pageBytes * pageCount);
  const pageTables = take(4 * pagesPerGroup * groupCount);
  const observables = take(4 * prepared.countObservables.length);
  const ordersOf = reactions.map(({ law }) => (law.kind === 'massAction' ? take(order.bytes * law.orders.length) : 0));
  const everyReaction = reactions.map((_, index) => index);
  const everyAssigned = prepared.assigned.map((_, index) => index);
  const listsOf = [...graph.reactions, [everyReaction]];
  const assignedOf = [...graph.assigned, everyAssigned];
  const ownLists = listsOf.map((lists) => (lists.length === 1 && lists[0]!.length <= mostInOwnList ? lists[0]! : []));
  const sharedLists = listsOf.map((lists, index) => (ownLists[index]!.length > 0 ? [] : lists));
  const firings = ownLists.map((own, index) => {
    const bytes = firing.changes + change.bytes * (reactions[index]?.changes.length ?? 0) + 4 * own.length;
    const fits = index < reactions.length && bytes <= record.bytes - record.ownFiring;
    return fits ? records + record.bytes * index + record.ownFiring : take(bytes);
  });
  const listStarts = sharedLists.map((lists) => take(list.bytes * lists.length));
  const begins = new Map<readonly number[], number>();
  for (const numbers of [...sharedLists.flat(), ...assignedOf])
    if (!begins.has(numbers)) begins.set(numbers, take(4 * numbers.length));

  const layout: GroupLayout = {
    one,
    assigned,
    records,
    everything: firings.at(-1)!,
    groups,
    active,
    activeCount,
    freePages,
    freeCount,
    pages,
    pageCount,
    observables,
    lawFunctions,
    realFunctions: prepared.assigned.length + lawFunctions.length,
    end,
  };

  function write(memory: WebAssembly.Memory, { constants }: PointTask): void {
    const view = new DataView(memory.buffer);
    const whole = (at: number, value: number): void => view.setInt32(at, value, true);
    const real = (at: number, value: number): void => view.setFloat64(at, value, true);
    const functionOf = new Map(lawFunctions.map((reaction, i) => [reaction, prepared.assigned.length + i]));
    real(one, 1);
    reactions.forEach((reaction, index) => {
      const at = records + record.bytes * index;
      const { law } = reaction;
      const asRecord = (kind: number, first: number, second: number): void => {
        whole(at + record.first, first | kind);
        whole(at + record.second, second);
        whole(at + record.firing, firings[index]!);
      };
      if (law.kind === 'expression' || !inTables(reaction)) {
        asRecord(lawKind.function, functionOf.get(index)! << functionShift, 0);
      } else {
        const { factor, orders } = law;
        real(
          at + record.factor,
          factor.kind === 'number' ? factor.value : constants[(factor as { slot: number }).slot]!,
        );
        const [a, b] = orders;
        if (!a) asRecord(lawKind.product, one, one);
        else if (!b && a.order === 1) asRecord(lawKind.product, place(a.species), one);
        else if (!b && a.order === 2) asRecord(lawKind.pairs, place(a.species), place(a.species));
        else if (orders.length === 2 && a.order === 1 && b!.order === 1)
          asRecord(lawKind.product, place(a.species), place(b!.species));
        else asRecord(lawKind.orders, ordersOf[index]!, ordersOf[index]! + order.bytes * orders.length);
        orders.forEach(({ species, order: count }, i) => {
          whole(ordersOf[index]! + order.bytes * i + order.place, place(species));
          whole(ordersOf[index]! + order.bytes * i + order.count, count);
        });
      }
    });
    firings.forEach((at, index) => {
      const changes = reactions[index]?.changes ?? [];
      const changesEnd = at + firing.changes + change.bytes * changes.length;
      changes.forEach(({ species, count }, i) => {
        whole(at + firing.changes + change.bytes * i + change.count, count);
        whole(at + firing.changes + change.bytes * i + change.place, place(species));
      });
      ownLists[index]!.forEach((other, i) => whole(changesEnd + 4 * i, records + record.bytes * other));
      whole(at + firing.changesEnd, changesEnd);
      whole(at + firing.ownListEnd, changesEnd + 4 * ownLists[index]!.length);
      whole(at + firing.lists, listStarts[index]!);
      whole(at + firing.listsEnd, listStarts[index]! + list.bytes * sharedLists[index]!.length);
      sharedLists[index]!.forEach((numbers, i) => {
        const entry = listStarts[index]! + list.bytes * i;
        whole(entry + list.begin, begins.get(numbers)!);
        whole(entry + list.end, begins.get(numbers)! + 4 * numbers.length);
      });
      const rules = assignedOf[index]!;
      whole(at + firing.assigned, begins.get(rules)!);
      whole(at + firing.assignedEnd, begins.get(rules)! + 4 * rules.length);
    });
    for (const numbers of new Set(sharedLists.flat()))
      numbers.forEach((index, i) => whole(begins.get(numbers)! + 4 * i, records + record.bytes * index));
    for (const numbers of assignedOf) numbers.forEach((index, i) => whole(begins.get(numbers)! + 4 * i, index));
    for (let exponent = 1; exponent < groupCount - 1; exponent++) {
      const at = groups + group.bytes * exponent;
      real(at + group.bound, 2 ** (exponent - 1022));
      whole(at + group.pages, pageTables + 4 * pagesPerGroup * exponent);
    }
    prepared.countObservables.forEach((species, i) => whole(observables + 4 * i, place(species)));
  }
  return { layout, write };
}
