/** Puts assignment rules into an order in which each uses only what was worked out before it. */

/**
 * `uses[i]` lists the rules that rule i reads. Returns rule indices in dependency order (document order where it is
 * free), or the rules of one cycle. Depth-first search, linear in rules and uses, without recursion.
 */
export function orderAssignmentRules(uses: number[][]): { ok: true; order: number[] } | { ok: false; cycle: number[] } {
  const state: ('new' | 'open' | 'done')[] = uses.map(() => 'new');
  const order: number[] = [];
  for (let root = 0; root < uses.length; root++) {
    if (state[root] !== 'new') continue;
    const path = [{ rule: root, next: 0 }];
    state[root] = 'open';
    while (path.length > 0) {
      const top = path.at(-1)!;
      const used = uses[top.rule]![top.next++];
      if (used === undefined) {
        state[top.rule] = 'done';
        order.push(top.rule);
        path.pop();
      } else if (state[used] === 'open') {
        const rules = path.map(({ rule }) => rule);
        return { ok: false, cycle: rules.slice(rules.indexOf(used)) };
      } else if (state[used] === 'new') {
        state[used] = 'open';
        path.push({ rule: used, next: 0 });
      }
    }
  }
  return { ok: true, order };
}
