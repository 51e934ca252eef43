/**
 * The SIMD kernel's functions for single lanes, called where a lane needs attention: it passed a grid time, finished, met
 * something that only the scalar kernel handles, or has to be filled with the next replicate.
 */
import {
  emitAssignments,
  emitChangeTime,
  emitScheduledChanges,
  timedChanges,
  type ChangeContext,
} from './emit-changes.ts';
import { ExpressionEmitter } from './emit-expression.ts';
import { emitSeeding } from './emit-random.ts';
import { emitGridTime, emitRecording, emitReplicateKey, emitStoreFirings } from './emit-recording.ts';
import { firingsBetweenChecks, handedOver, laneCount, largestLaneCount, type LaneLayout } from './lane-layout.ts';
import { scalarLanes } from './lanes.ts';
import { control, structureLayout } from './memory-layout.ts';
import type { PreparedNetwork } from './prepared-network.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import {
  branchIf,
  call,
  f64,
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
const field = (at: number): Node<'i32'> => memory('i32.load', at, zero);
/** Later than any start. */
const never = 2 ** 60;

export interface LaneFunctions {
  /** Fills the lane with the next replicate, or leaves it idle. */
  refill: FunctionBuilder<'none'>;
  /** Writes what lies before the lane's new time; refills it when the replicate ends. `sane` is 0 for a lane to hand over. */
  attend: FunctionBuilder<'none'>;
  /** Hands over lanes with large counts or at their event limit. */
  check: FunctionBuilder<'none'>;
}

export function laneFunctions(module: ModuleBuilder, prepared: PreparedNetwork, layout: LaneLayout): LaneFunctions {
  const refill = refillFunction(module, prepared, layout);
  return {
    refill,
    attend: attendFunction(module, prepared, layout, refill),
    check: checkFunction(module, prepared, layout, refill),
  };
}

/** Loads and stores of the lane whose number times 8 is in `at`. */
const laneField = (at: Local<'i32'>) => ({
  real: (table: number): Node<'f64'> => memory('f64.load', table, get(at)),
  setReal: (table: number, value: Node<'f64'>): Node => memory('f64.store', table, get(at), value),
  whole: (table: number): Node<'i32'> => memory('i32.load', table, get(at)),
  setWhole: (table: number, value: Node<'i32'>): Node => memory('i32.store', table, get(at), value),
});

const addToActive = (layout: LaneLayout, change: number): Node =>
  memory('i32.store', layout.activeLanes, zero, op('i32.add', field(layout.activeLanes), i32(change)));

function refillFunction(module: ModuleBuilder, prepared: PreparedNetwork, layout: LaneLayout): FunctionBuilder<'none'> {
  const fn = module.function('refill', [['lane', 'i32']], 'none');
  const at = fn.parameter(0, 'i32');
  const lane = laneField(at);
  const slot = fn.local('i32', 'slot');
  const words = ['s0', 's1', 's2', 's3'].map((name) => fn.local('i64', name));
  const { initialState } = structureLayout(prepared);
  fn.emit(
    set(at, op('i32.shl', get(at), i32(3))),
    set(slot, field(control.slot)),
    ...Array.from({ length: prepared.stateSize }, (_, place) =>
      lane.setReal(layout.counts + place * layout.tableBytes, memory('f64.load', initialState + 8 * place, zero)),
    ),
    lane.setReal(layout.time, f64(0)),
    when(
      op('i32.lt_s', get(slot), field(control.slotCount)),
      [
        ...emitSeeding(module, fn, words, emitReplicateKey(slot)),
        ...words.map((word, i) => memory('i64.store', layout.generator + i * layout.tableBytes, get(at), get(word))),
        memory('i32.store', control.slot, zero, op('i32.add', get(slot), i32(1))),
        when(op('i32.lt_s', lane.whole(layout.slot), zero), [addToActive(layout, 1)]),
        lane.setWhole(layout.slot, get(slot)),
        lane.setWhole(layout.gridIndex, zero),
        lane.setWhole(layout.changeIndex, zero),
        // Grid time 0 comes first of all: its entry in the table lies before every change.
        lane.setReal(layout.nextStopTime, memory('f64.load', 0, field(control.gridTimes))),
        lane.setReal(layout.start, memory('f64.load', layout.steps, zero)),
      ],
      [
        when(op('i32.ge_s', lane.whole(layout.slot), zero), [addToActive(layout, -1)]),
        lane.setWhole(layout.slot, i32(-1)),
        // An idle lane goes on with a state that nobody reads and never reaches a grid time.
        lane.setReal(layout.nextStopTime, f64(Infinity)),
        lane.setReal(layout.start, f64(never)),
      ],
    ),
    ...emitLimit(layout),
  );
  return fn;
}

/** Works out when the lane that began first reaches its event limit. */
function emitLimit(layout: LaneLayout): Node[] {
  const earliest = Array.from({ length: laneCount }, (_, i) => memory('f64.load', layout.start + 8 * i, zero)).reduce(
    (a, b) => op('f64.min', a, b),
  );
  const limit = op('f64.add', earliest, memory('f64.load', control.eventLimit, zero));
  return [memory('f64.store', layout.limitAt, zero, limit)];
}

function attendFunction(
  module: ModuleBuilder,
  prepared: PreparedNetwork,
  layout: LaneLayout,
  refill: FunctionBuilder<'none'>,
): FunctionBuilder<'none'> {
  const parameters = [
    ['lane', 'i32'],
    ['sane', 'i32'],
  ] as const;
  const fn = module.function('attend', parameters, 'none');
  const laneNumber = fn.parameter(0, 'i32');
  const sane = fn.parameter(1, 'i32');
  const at = fn.local('i32', 'at');
  const lane = laneField(at);
  const slot = fn.local('i32', 'slot');
  const gridIndex = fn.local('i32', 'gridIndex');
  const newTime = fn.local('f64', 'newTime');
  const nextGridTime = fn.local('f64', 'nextGridTime');
  const nextChangeTime = fn.local('f64', 'nextChangeTime');
  const changeIndex = fn.local('i32', 'changeIndex');
  const species = (index: number): Node<'f64'> => lane.real(layout.countsBefore + index * layout.tableBytes);
  const assigned = prepared.assigned.map((_, index) => fn.local('f64', `assigned${index}`));
  const { constants } = structureLayout(prepared);
  const expressions = new ExpressionEmitter(scalarLanes, module, fn, {
    species,
    constant: (constantSlot) => memory('f64.load', constants + 8 * constantSlot, zero),
    assigned: (index) => get(assigned[index]!),
  });
  const refillAndReturn = (): Node[] => [call(refill, get(laneNumber)), giveBack()];
  const again = label('nextGridPoint');
  const handOver = (): Node[] => [emitStoreFirings(slot, f64(handedOver)), ...refillAndReturn()];
  const changing: ChangeContext = {
    prepared,
    fn,
    expressions,
    assign: () => emitAssignments(prepared, expressions, assigned),
    state: {
      get: species,
      set: (place, value) => lane.setReal(layout.countsBefore + place * layout.tableBytes, value),
    },
    // Rare: the scalar kernel finds the same fault and tells it.
    fail: handOver,
  };
  const timed = timedChanges(prepared).length > 0;
  const nextStopTime = timed ? op('f64.min', get(nextGridTime), get(nextChangeTime)) : get(nextGridTime);
  const firings = op('f64.sub', op('f64.sub', memory('f64.load', layout.steps, zero), f64(1)), lane.real(layout.start));
  fn.emit(
    set(at, op('i32.shl', get(laneNumber), i32(3))),
    set(slot, lane.whole(layout.slot)),
    when(op('i32.lt_s', get(slot), zero), refillAndReturn()),
    when(op('i32.eqz', get(sane)), handOver()),
    set(newTime, lane.real(layout.newTime)),
    set(gridIndex, lane.whole(layout.gridIndex)),
    ...(prepared.realObservables.length > 0 ? emitAssignments(prepared, expressions, assigned) : []),
    ...(timed
      ? [
          set(nextGridTime, emitGridTime(gridIndex)),
          set(changeIndex, lane.whole(layout.changeIndex)),
          set(nextChangeTime, emitChangeTime(changeIndex)),
        ]
      : []),
    loop(
      again,
      ...(timed
        ? [
            when(op('f64.le', get(nextChangeTime), get(nextGridTime)), [
              lane.setReal(layout.time, get(nextChangeTime)),
              ...emitScheduledChanges(changing, changeIndex, nextChangeTime),
              ...emitGoOnAfterChange({ prepared, layout, lane, handOver }),
              lane.setWhole(layout.changeIndex, get(changeIndex)),
              lane.setWhole(layout.gridIndex, get(gridIndex)),
              lane.setReal(layout.nextStopTime, nextStopTime),
              giveBack(),
            ]),
          ]
        : []),
      ...emitRecording(prepared, fn, expressions, species, gridIndex, slot),
      set(gridIndex, op('i32.add', get(gridIndex), i32(1))),
      when(op('i32.gt_s', get(gridIndex), field(control.gridIntervals)), [
        emitStoreFirings(slot, firings),
        ...refillAndReturn(),
      ]),
      // A time that is not a number belongs to a total of 0: nothing fires any more.
      set(nextGridTime, emitGridTime(gridIndex)),
      branchIf(again, op('i32.eqz', op('f64.le', get(newTime), nextStopTime))),
    ),
    lane.setWhole(layout.gridIndex, get(gridIndex)),
    lane.setReal(layout.nextStopTime, nextStopTime),
  );
  return fn;
}

/**
 * The lane goes on from the state after a change: the step that reached beyond it was no firing, and its draws are gone. A lane
 * that now holds large counts is handed over.
 */
function emitGoOnAfterChange(options: {
  prepared: PreparedNetwork;
  layout: LaneLayout;
  lane: ReturnType<typeof laneField>;
  handOver: () => Node[];
}): Node[] {
  const { prepared, layout, lane, handOver } = options;
  const before = (place: number): Node<'f64'> => lane.real(layout.countsBefore + place * layout.tableBytes);
  const counts = new Set(
    prepared.changes.flatMap(({ sets }) => sets.filter(({ isCount }) => isCount)).map((s) => s.place),
  );
  const large = [...counts].map((place) => op('f64.gt', before(place), f64(largestLaneCount)));
  return [
    ...large.map((condition) => when(condition, handOver())),
    ...Array.from({ length: prepared.stateSize }, (_, place) =>
      lane.setReal(layout.counts + place * layout.tableBytes, before(place)),
    ),
    lane.setReal(layout.start, op('f64.add', lane.real(layout.start), f64(1))),
    ...emitLimit(layout),
  ];
}

function checkFunction(
  module: ModuleBuilder,
  prepared: PreparedNetwork,
  layout: LaneLayout,
  refill: FunctionBuilder<'none'>,
): FunctionBuilder<'none'> {
  const fn = module.function('check', [], 'none');
  const laneNumber = fn.local('i32', 'lane');
  const at = fn.local('i32', 'at');
  const slot = fn.local('i32', 'slot');
  const lane = laneField(at);
  const again = label('nextLane');
  const steps = (): Node<'f64'> => memory('f64.load', layout.steps, zero);
  const large = prepared.changing.map((species) =>
    op('f64.gt', lane.real(layout.counts + species * layout.tableBytes), f64(largestLaneCount)),
  );
  const spent = op(
    'f64.ge',
    op('f64.sub', steps(), lane.real(layout.start)),
    memory('f64.load', control.eventLimit, zero),
  );
  fn.emit(
    memory('f64.store', layout.checkAt, zero, op('f64.add', steps(), f64(firingsBetweenChecks))),
    loop(
      again,
      set(at, op('i32.shl', get(laneNumber), i32(3))),
      set(slot, lane.whole(layout.slot)),
      when(
        large.reduce((any, one) => op('i32.or', any, one), spent),
        [
          when(op('i32.ge_s', get(slot), zero), [emitStoreFirings(slot, f64(handedOver))]),
          call(refill, get(laneNumber)),
        ],
      ),
      branchIf(again, op('i32.lt_s', tee(laneNumber, op('i32.add', get(laneNumber), i32(1))), i32(laneCount))),
    ),
  );
  return fn;
}

/** Statements that attend to the lanes whose bits are set in `wanting`; `sane` has the bits of lanes to go on with. */
export function emitAttention(functions: LaneFunctions, wanting: Local<'i32'>, sane: Local<'i32'>): Node[] {
  const bit = (mask: Local<'i32'>, laneNumber: number): Node<'i32'> => op('i32.and', get(mask), i32(1 << laneNumber));
  return Array.from({ length: laneCount }, (_, laneNumber) =>
    when(bit(wanting, laneNumber), [call(functions.attend, i32(laneNumber), bit(sane, laneNumber))]),
  );
}
