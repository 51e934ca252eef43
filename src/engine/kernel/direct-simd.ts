/**
 * Generates the SIMD kernel of the direct method: one replicate in each lane of f64x2, two vectors side by side, lanes refilled
 * as replicates end. It computes what exact/direct-method.ts specifies, with the scalar kernel's operations on two lanes.
 *
 * The inner loop has no calls. A lane that needs attention has its state before the firing stored, the loop ends after the step,
 * and lane-functions.ts does the rest. What is rare and delicate (failures, counts near 2^31, event limits) is handed over: the
 * host runs that replicate again by the scalar kernel, which is part of the same module and memory.
 */
import { directScalarModule } from './direct-scalar.ts';
import { emitLogarithmOfNormal } from './elementary/logarithm.ts';
import { ExpressionEmitter } from './emit-expression.ts';
import { emitNext, generatorLocals, onePlusUniform, type GeneratorLocals } from './emit-random.ts';
import { emitSelection } from './emit-selection.ts';
import { emitAttention, laneFunctions } from './lane-functions.ts';
import { laneCount, laneLayout, vectors, type LaneLayout } from './lane-layout.ts';
import { vectorLanes as lanes } from './lanes.ts';
import { control, largestTotal, status, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import {
  branch,
  branchIf,
  call,
  f64,
  f64x2,
  get,
  giveBack,
  i32,
  label,
  loop,
  memory,
  op,
  set,
  tee,
  when,
  type Local,
  type Node,
} from './wasm/node.ts';

const zero = i32(0);
const everyLane = 2 ** laneCount - 1;

/** The locals of one vector. */
interface VectorLocals {
  index: number;
  time: Local<'v128'>;
  nextStopTime: Local<'v128'>;
  counts: Map<number, Local<'v128'>>;
  generator: GeneratorLocals<'vector'>;
}

/** `runLanes(steps: i32): i32` advances every lane by at most so many steps; `run` is the scalar kernel. */
export function directSimdModule(prepared: PreparedNetwork): ModuleBuilder {
  const module = directScalarModule(prepared);
  const layout = laneLayout(prepared);
  const functions = laneFunctions(module, prepared, layout);
  const fn = module.function('runLanes', [['chunk', 'i32']], 'i32', { exported: true });
  const chunk = fn.parameter(0, 'i32');
  const left = fn.local('i32', 'left');
  const length = fn.local('i32', 'length');
  const wanting = fn.local('i32', 'wanting');
  const sane = fn.local('i32', 'sane');
  const steps = fn.local('f64', 'steps');
  const all = Array.from({ length: vectors }, (_, index): VectorLocals => ({
    index,
    time: fn.local('v128', `time${index}`),
    nextStopTime: fn.local('v128', `nextStopTime${index}`),
    counts: new Map(placesOf(prepared).map((species) => [species, fn.local('v128', `x${species}_${index}`)])),
    generator: generatorLocals(lanes, fn),
  }));
  const real = (at: number): Node<'f64'> => memory('f64.load', at, zero);
  const limitingSteps = op('f64.sub', op('f64.min', real(layout.checkAt), real(layout.limitAt)), get(steps));
  const outer = label('outer');
  const inner = label('inner');
  const start = Array.from({ length: laneCount }, (_, laneNumber) => [
    memory('i32.store', layout.slot + 8 * laneNumber, zero, i32(-1)),
    memory('f64.store', layout.start + 8 * laneNumber, zero, f64(2 ** 60)),
  ]).flat();
  fn.emit(
    when(op('i32.eqz', memory('i32.load', control.active, zero)), [
      memory('i32.store', control.active, zero, i32(1)),
      memory('i32.store', layout.activeLanes, zero, zero),
      memory('f64.store', layout.steps, zero, f64(0)),
      memory('f64.store', layout.checkAt, zero, f64(0)),
      ...start,
      ...Array.from({ length: laneCount }, (_, laneNumber) => call(functions.refill, i32(laneNumber))),
    ]),
    loop(
      outer,
      when(op('i32.eqz', memory('i32.load', layout.activeLanes, zero)), [giveBack(i32(status.finished))]),
      when(op('i32.le_s', get(chunk), zero), [giveBack(i32(status.paused))]),
      set(steps, real(layout.steps)),
      when(op('i32.eqz', op('f64.gt', limitingSteps, f64(0))), [call(functions.check), branch(outer)]),
      set(length, op('i32.trunc_sat_f64_s', op('f64.min', op('f64.convert_i32_s', get(chunk)), limitingSteps))),
      ...all.flatMap((vector) => loadVector(vector, layout)),
      set(left, get(length)),
      set(wanting, zero),
      set(sane, i32(everyLane)),
      loop(
        inner,
        ...all.flatMap((vector) => emitStep({ prepared, layout, module, fn, vector, left, length, wanting, sane })),
        branchIf(inner, tee(left, op('i32.sub', get(left), i32(1)))),
      ),
      ...all.flatMap((vector) => storeVector(vector, layout, layout.counts)),
      memory('f64.store', layout.steps, zero, op('f64.add', get(steps), op('f64.convert_i32_s', get(length)))),
      set(chunk, op('i32.sub', get(chunk), get(length))),
      when(get(wanting), emitAttention(functions, wanting, sane)),
      branch(outer),
    ),
    giveBack(i32(status.finished)),
  );
  return module;
}

const placesOf = (prepared: PreparedNetwork): number[] => Array.from({ length: prepared.stateSize }, (_, i) => i);

const offsetOf = (table: number, vector: VectorLocals): number => table + 16 * vector.index;

function loadVector(vector: VectorLocals, layout: LaneLayout): Node[] {
  const load = (target: Local<'v128'>, table: number): Node =>
    set(target, memory('v128.load', offsetOf(table, vector), zero));
  return [
    load(vector.time, layout.time),
    load(vector.nextStopTime, layout.nextStopTime),
    ...vector.generator.state.map((word, i) => load(word, layout.generator + i * layout.tableBytes)),
    ...[...vector.counts].map(([species, local]) => load(local, layout.counts + species * layout.tableBytes)),
  ];
}

function storeVector(vector: VectorLocals, layout: LaneLayout, countTable: number): Node[] {
  const store = (table: number, local: Local<'v128'>): Node =>
    memory('v128.store', offsetOf(table, vector), zero, get(local));
  return [
    store(layout.time, vector.time),
    ...vector.generator.state.map((word, i) => store(layout.generator + i * layout.tableBytes, word)),
    ...storeCounts(vector, layout, countTable),
  ];
}

const storeCounts = (vector: VectorLocals, layout: LaneLayout, countTable: number): Node[] =>
  [...vector.counts].map(([species, local]) =>
    memory('v128.store', offsetOf(countTable + species * layout.tableBytes, vector), zero, get(local)),
  );

interface StepContext {
  prepared: PreparedNetwork;
  layout: LaneLayout;
  module: ModuleBuilder;
  fn: FunctionBuilder;
  vector: VectorLocals;
  left: Local<'i32'>;
  length: Local<'i32'>;
  wanting: Local<'i32'>;
  sane: Local<'i32'>;
}

/** One step of one vector: propensities, two draws, the new time, a look whether all is ordinary, the firing. */
function emitStep({ prepared, layout, module, fn, vector, left, length, wanting, sane }: StepContext): Node[] {
  const { generator, time, nextStopTime, counts } = vector;
  const newTime = fn.local('v128', 'newTime');
  const threshold = fn.local('v128', 'threshold');
  const within = fn.local('v128', 'within');
  const regular = fn.local('v128', 'regular');
  const { statements, prefixes, total, least } = emitPropensities(prepared, module, fn, counts);
  const logarithm = emitLogarithmOfNormal(
    lanes,
    fn,
    lanes.subtract(f64x2(2), onePlusUniform(lanes, get(generator.output))),
  );
  const finite = lanes.lessOrEqual(get(total), f64x2(largestTotal));
  const bits = (mask: Local<'v128'>): Node<'i32'> => op('i64x2.bitmask', get(mask));
  const shift = i32(2 * vector.index);
  return [
    ...statements,
    ...emitNext(lanes, generator),
    ...logarithm.statements,
    set(newTime, lanes.subtract(get(time), lanes.divide(logarithm.value, get(total)))),
    ...emitNext(lanes, generator),
    set(threshold, lanes.multiply(lanes.subtract(onePlusUniform(lanes, get(generator.output)), f64x2(1)), get(total))),
    set(regular, least ? lanes.both(finite, lanes.lessOrEqual(f64x2(0), get(least))) : finite),
    set(within, lanes.both(lanes.lessOrEqual(get(newTime), get(nextStopTime)), get(regular))),
    when(op('i32.ne', bits(within), i32(3)), [
      ...storeCounts(vector, layout, layout.countsBefore),
      memory('v128.store', offsetOf(layout.newTime, vector), zero, get(newTime)),
      set(wanting, op('i32.or', get(wanting), op('i32.shl', op('i32.xor', bits(within), i32(3)), shift))),
      set(
        sane,
        op('i32.and', get(sane), op('i32.xor', op('i32.shl', op('i32.xor', bits(regular), i32(3)), shift), i32(-1))),
      ),
      // This step is the last of the inner loop.
      set(length, op('i32.add', op('i32.sub', get(length), get(left)), i32(1))),
      set(left, i32(1)),
    ]),
    ...emitSelection(prepared, layout, fn, prefixes, threshold, counts),
    set(time, get(newTime)),
  ];
}

/** Propensities and their prefix sums; `least` is the smallest of those that might be negative, null where none might. */
function emitPropensities(
  prepared: PreparedNetwork,
  module: ModuleBuilder,
  fn: FunctionBuilder,
  counts: Map<number, Local<'v128'>>,
): { statements: Node[]; prefixes: Local<'v128'>[]; total: Local<'v128'>; least: Local<'v128'> | null } {
  const { constants } = structureLayout(prepared);
  const assigned = prepared.assigned.map((_, index) => fn.local('v128', `assigned${index}`));
  const expressions = new ExpressionEmitter(lanes, module, fn, {
    species: (index) => get(counts.get(index)!),
    constant: (slot) => memory('v128.load64_splat', constants + 8 * slot, zero),
    assigned: (index) => get(assigned[index]!),
  });
  const statements = prepared.assigned.flatMap((term, index) => expressions.assign(assigned[index]!, term));
  const prefixes: Local<'v128'>[] = [];
  let least: Local<'v128'> | null = null;
  prepared.reactions.forEach((reaction, index) => {
    const propensity = fn.local('v128', `propensity${index}`);
    statements.push(...expressions.assignPropensity(propensity, reaction));
    if (mightBeNegative(prepared, index)) {
      const next = fn.local('v128', 'least');
      statements.push(set(next, least ? op('f64x2.pmin', get(least), get(propensity)) : get(propensity)));
      least = next;
    }
    const previous = prefixes.at(-1);
    const prefix = previous ? fn.local('v128', `prefix${index}`) : propensity;
    if (previous) statements.push(set(prefix, lanes.add(get(previous), get(propensity))));
    prefixes.push(prefix);
  });
  let total = prefixes.at(-1)!;
  if (prepared.reactions.every((_, index) => mightBeMinusZero(prepared, index))) {
    // 2 A with none left has −0 = c · 0 · (0 − 1): a total of −0 would give a time before all others.
    total = fn.local('v128', 'total');
    statements.push(set(total, lanes.add(get(prefixes.at(-1)!), f64x2(0))));
  }
  return { statements, prefixes, total, least };
}

/** A sum is −0 only where every part is; mass action of first order in each reactant is 0 or above. */
function mightBeMinusZero({ reactions }: PreparedNetwork, index: number): boolean {
  const { law } = reactions[index]!;
  if (law.kind === 'expression' || (law.factor.kind !== 'constant' && law.factor.kind !== 'number')) return true;
  return law.orders.some(({ order }) => order > 1);
}

/** Mass action with a constant factor is not negative once the host has seen that the factor is not. */
function mightBeNegative({ reactions }: PreparedNetwork, index: number): boolean {
  const { law } = reactions[index]!;
  return law.kind === 'expression' || (law.factor.kind !== 'constant' && law.factor.kind !== 'number');
}
