/**
 * Composition-rejection in plain TypeScript. It works out every propensity after every firing and adds every sum anew, so that a
 * dependency missing from the graph or a sum that drifted would show as a difference; the graph gives it the order only.
 */
import { dependencyGraph } from '../kernel/dependency-graph.ts';
import { evaluatePropensity } from '../kernel/evaluate.ts';
import { largestTotal } from '../kernel/memory-layout.ts';
import type { PreparedNetwork } from '../kernel/prepared-network.ts';
import { groupOf, roundedPropensity, roundingBits } from './composition-rejection.ts';
import { prefixSums, type Selection } from './reference-direct.ts';

export function groupSelection(prepared: PreparedNetwork): Selection {
  const { reactions } = prepared;
  const rounding = roundingBits(reactions.length);
  const graph = dependencyGraph(prepared);
  const everything = reactions.map((_, reaction) => reaction);
  const propensities = reactions.map(() => 0);
  /** Members by group; groups without members are left out. */
  const groups = new Map<number, number[]>();
  let total = 0;

  const move = (reaction: number, value: number): void => {
    const [from, to] = [groupOf(propensities[reaction]!), groupOf(value)];
    propensities[reaction] = value;
    if (from === to) return;
    if (from > 0) {
      const members = groups.get(from)!;
      const last = members.pop()!;
      if (last !== reaction) members[members.indexOf(reaction)] = last;
      if (members.length === 0) groups.delete(from);
    }
    if (to > 0) groups.set(to, [...(groups.get(to) ?? []), reaction]);
  };
  const sumOf = (group: number): number =>
    groups.get(group)!.reduce((sum, reaction) => sum + propensities[reaction]!, 0);
  const fromLargest = (): number[] => [...groups.keys()].sort((a, b) => b - a);

  return {
    total(state, fired) {
      const sums = prefixSums(prepared, state);
      if (!Array.isArray(sums)) return sums;
      const inOrder = fired === null ? everything : [...graph.reactions[fired]!.flat(), ...everything];
      for (const reaction of inOrder)
        move(reaction, roundedPropensity(evaluatePropensity(reactions[reaction]!, state), rounding));
      total = fromLargest().reduce((sum, group) => sum + sumOf(group), 0);
      return total <= largestTotal ? total : { kind: 'not_a_number', reaction: null };
    },
    choose(uniform, draw) {
      const threshold = uniform * total;
      let prefix = 0;
      const group = fromLargest().find((candidate) => (prefix += sumOf(candidate)) > threshold)!;
      const members = groups.get(group)!;
      for (;;) {
        const place = draw() * members.length;
        const member = members[Math.floor(place)]!;
        if ((place - Math.floor(place)) * 2 ** (group - 1022) < propensities[member]!) return member;
      }
    },
  };
}
