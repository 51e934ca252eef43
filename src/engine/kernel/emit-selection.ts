/**
 * Applies the chosen reaction in every lane without a branch.
 *
 * The chosen reaction is the first k with prefix_k > threshold, so mask_k = (prefix_k ≤ threshold) is true for all reactions
 * before it. A species' change is then d_0 + Σ_k mask_k · (d_{k+1} − d_k): two instructions for each place where neighbouring
 * reactions change the species differently. Where there are many such places, the masks are added up to the number of
 * the chosen reaction instead, and the changes are read from a table, three instructions a species.
 */
import { vectorLanes as lanes } from './lanes.ts';
import type { LaneLayout } from './lane-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import type { FunctionBuilder } from './wasm/module-builder.ts';
import { get, i32, i64x2, lane, laneMemory, memory, op, set, type Local, type Node } from './wasm/node.ts';

export function emitSelection(
  prepared: PreparedNetwork,
  layout: LaneLayout,
  fn: FunctionBuilder,
  prefixes: Local<'v128'>[],
  threshold: Local<'v128'>,
  counts: Map<number, Local<'v128'>>,
): Node[] {
  const statements: Node[] = [];
  const masks = prefixes.slice(0, -1).map((prefix, k) => {
    const mask = fn.local('v128', `mask${k}`);
    statements.push(set(mask, lanes.lessOrEqual(get(prefix), get(threshold))));
    return mask;
  });
  const differing = prepared.changing.map((species) => differences(prepared, species));
  const tableCost = masks.length + 8;
  const saved = differing.reduce((sum, { steps }) => sum + Math.max(0, 2 * steps.length - 3), 0);
  const useTable = saved > tableCost;
  const rows = useTable ? emitRows(layout, fn, masks, statements) : null;
  prepared.changing.forEach((species, column) => {
    const { first, steps } = differing[column]!;
    const count = counts.get(species)!;
    if (rows && 2 * steps.length > 3) {
      const offset = layout.changes + 8 * column;
      const change = laneMemory(
        'v128.load64_lane',
        offset,
        1,
        get(rows[1]),
        memory('v128.load64_zero', offset, get(rows[0])),
      );
      statements.push(set(count, lanes.add(get(count), change)));
      return;
    }
    const terms = steps.map(({ mask, step }) => lanes.orZero(get(masks[mask]!), lanes.real(step)));
    if (first !== 0) terms.unshift(lanes.real(first));
    const [start, ...rest] = terms;
    if (start)
      statements.push(
        set(
          count,
          lanes.add(
            get(count),
            rest.reduce((sum, term) => lanes.add(sum, term), start),
          ),
        ),
      );
  });
  return statements;
}

/** The change by reaction 0, and where the change differs from one reaction to the next. */
function differences(
  prepared: PreparedNetwork,
  species: number,
): { first: number; steps: { mask: number; step: number }[] } {
  const changes = prepared.reactions.map((reaction) => reaction.changes.find((c) => c.species === species)?.count ?? 0);
  const steps = changes
    .slice(1)
    .map((change, mask) => ({ mask, step: change - changes[mask]! }))
    .filter(({ step }) => step !== 0);
  return { first: changes[0] ?? 0, steps };
}

/** Byte offsets of the two lanes' rows in the table of changes. */
function emitRows(
  layout: LaneLayout,
  fn: FunctionBuilder,
  masks: Local<'v128'>[],
  statements: Node[],
): [Local<'i32'>, Local<'i32'>] {
  // A mask is −1 as an integer: 0 minus all masks is the number of the chosen reaction.
  let chosen: Node<'v128'> = i64x2(0n);
  for (const mask of masks) chosen = op('i64x2.sub', chosen, get(mask));
  const number = fn.local('v128', 'chosen');
  statements.push(set(number, chosen));
  return [0, 1].map((index) => {
    const row = fn.local('i32', `row${index}`);
    const reaction = op('i32.wrap_i64', lane('i64x2.extract_lane', index, get(number)));
    statements.push(set(row, op('i32.mul', reaction, i32(layout.changeRowBytes))));
    return row;
  }) as [Local<'i32'>, Local<'i32'>];
}
