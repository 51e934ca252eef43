/**
 * Functions of the composition-rejection kernel that keep propensities and groups up to date; what they compute is written in
 * exact/composition-rejection.ts.
 */
import { leastPropensity, roundingBits } from '../exact/composition-rejection.ts';
import {
  firing,
  functionShift,
  group,
  groupCount,
  lawKind,
  list,
  order,
  pageShift,
  record,
  type GroupLayout,
} from './group-layout.ts';
import { largestTotal } from './memory-layout.ts';
import { largestHoistedOrder, type PreparedNetwork } from './prepared-network.ts';
import { each } from './state-functions.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import {
  branch,
  branchIf,
  call,
  callIndirect,
  f64,
  get,
  giveBack,
  i32,
  i64,
  label,
  loop,
  memory,
  op,
  select,
  set,
  when,
  type Callable,
  type Local,
  type Node,
} from './wasm/node.ts';

const zero = i32(0);
const add = (a: Node<'i32'>, b: Node<'i32'>): Node<'i32'> => op('i32.add', a, b);
const subtract = (a: Node<'i32'>, b: Node<'i32'>): Node<'i32'> => op('i32.sub', a, b);
const word = (at: number, address: Node<'i32'> = zero): Node<'i32'> => memory('i32.load', at, address);
const real = (at: number, address: Node<'i32'>): Node<'f64'> => memory('f64.load', at, address);
const setWord = (at: number, address: Node<'i32'>, value: Node<'i32'>): Node => memory('i32.store', at, address, value);
const setReal = (at: number, address: Node<'i32'>, value: Node<'f64'>): Node => memory('f64.store', at, address, value);

/** Address of the entry for place `index` of a list: its page's, from the group's table of pages. */
export const pageEntry = (groupAt: Local<'i32'>, index: Local<'i32'>): Node<'i32'> =>
  add(word(group.pages, get(groupAt)), op('i32.shl', op('i32.shr_u', get(index), i32(pageShift)), i32(2)));
/** Offset within its page of place `index` of a list. */
export const offsetInPage = (index: Local<'i32'>): Node<'i32'> => op('i32.shl', placeInPage(index), i32(2));
const placeInPage = (index: Local<'i32'>): Node<'i32'> => op('i32.and', get(index), i32(2 ** pageShift - 1));

export interface GroupFunctions {
  /** clear(): no propensities, no members. */
  clear: Callable<'none'>;
  /**
   * Statements that refresh what the firing at `fired` alters; `bad` where a propensity spoils the run. `entry` is theirs.
   */
  emitRefresh(fn: FunctionBuilder, fired: Local<'i32'>, bad: Node[]): Node[];
}

export function groupFunctions(
  { reactions: { length: reactions } }: PreparedNetwork,
  layout: GroupLayout,
  module: ModuleBuilder,
): GroupFunctions {
  const rare = {
    otherLaw: otherLawFunction(module),
    activate: activateFunction(layout, module),
    deactivate: deactivateFunction(layout, module),
  };
  const refresh = refreshFunction(layout, module, reactions, rare);
  return {
    clear: clearFunction(layout, module, reactions),
    emitRefresh(fn, fired, bad) {
      const entry = fn.local('i32', 'entry');
      const end = fn.local('i32', 'entriesEnd');
      return [
        set(entry, word(firing.changesEnd, get(fired))),
        set(end, word(firing.ownListEnd, get(fired))),
        emitRefreshList({ layout, fn, reactions, rare, entry, end: get(end), bad }),
        set(entry, word(firing.lists, get(fired))),
        set(end, word(firing.listsEnd, get(fired))),
        each(entry, get(end), list.bytes, [
          when(call(refresh, word(list.begin, get(entry)), word(list.end, get(entry))), bad),
        ]),
      ];
    },
  };
}

function clearFunction(layout: GroupLayout, module: ModuleBuilder, reactions: number): FunctionBuilder<'none'> {
  const fn = module.function('clear', [], 'none');
  const at = fn.local('i32', 'at');
  const page = fn.local('i32', 'page');
  return fn.emit(
    set(at, i32(layout.groups)),
    each(at, i32(layout.groups + group.bytes * groupCount), group.bytes, [
      setReal(group.sum, get(at), f64(0)),
      setWord(group.size, get(at), zero),
    ]),
    setWord(layout.activeCount, zero, zero),
    set(at, i32(layout.records)),
    each(at, i32(layout.records + record.bytes * reactions), record.bytes, [
      setReal(record.propensity, get(at), f64(0)),
    ]),
    set(page, i32(layout.pages)),
    set(at, i32(layout.freePages)),
    each(at, i32(layout.freePages + 4 * layout.pageCount), 4, [
      setWord(0, get(at), get(page)),
      set(page, add(get(page), i32(4 << pageShift))),
    ]),
    setWord(layout.freeCount, zero, i32(layout.pageCount)),
  );
}

/** Puts a group among those that have members, at the place of its exponent. */
function activateFunction(layout: GroupLayout, module: ModuleBuilder): FunctionBuilder<'none'> {
  const fn = module.function('activate', [['group', 'i32']], 'none');
  const added = fn.parameter(0, 'i32');
  const at = fn.local('i32', 'at');
  const before = fn.local('i32', 'before');
  const next = label('next');
  return fn.emit(
    set(at, add(i32(layout.active), op('i32.shl', word(layout.activeCount), i32(2)))),
    setWord(layout.activeCount, zero, add(word(layout.activeCount), i32(1))),
    loop(
      next,
      when(op('i32.gt_u', get(at), i32(layout.active)), [
        set(before, word(0, subtract(get(at), i32(4)))),
        when(op('i32.lt_u', get(before), get(added)), [
          setWord(0, get(at), get(before)),
          set(at, subtract(get(at), i32(4))),
          branch(next),
        ]),
      ]),
    ),
    setWord(0, get(at), get(added)),
  );
}

/** Takes a group from among those that have members. */
function deactivateFunction(layout: GroupLayout, module: ModuleBuilder): FunctionBuilder<'none'> {
  const fn = module.function('deactivate', [['group', 'i32']], 'none');
  const at = fn.local('i32', 'at');
  const next = label('next');
  const end = add(i32(layout.active), op('i32.shl', word(layout.activeCount), i32(2)));
  return fn.emit(
    setReal(group.sum, get(fn.parameter(0, 'i32')), f64(0)),
    set(at, i32(layout.active - 4)),
    loop(
      next,
      set(at, add(get(at), i32(4))),
      branchIf(next, op('i32.ne', word(0, get(at)), get(fn.parameter(0, 'i32')))),
    ),
    setWord(layout.activeCount, zero, subtract(word(layout.activeCount), i32(1))),
    each(at, end, 4, [setWord(0, get(at), word(4, get(at)))]),
  );
}

const kindOf = (first: Node<'i32'>): Node<'i32'> => op('i32.and', first, i32(lawKind.bits));

/** Mass action of any order from its table, or a law of the module's functions. */
function otherLawFunction(module: ModuleBuilder): FunctionBuilder<'f64'> {
  const fn = module.function('otherLaw', [['record', 'i32']], 'f64');
  const at = fn.parameter(0, 'i32');
  const value = fn.local('f64', 'value');
  const entry = fn.local('i32', 'entry');
  const end = fn.local('i32', 'end');
  const count = fn.local('f64', 'count');
  const step = fn.local('i32', 'step');
  const steps = fn.local('i32', 'steps');
  return fn.emit(
    ...(module.table.length > 0
      ? [
          when(op('i32.eq', kindOf(word(record.first, get(at))), i32(lawKind.function)), [
            giveBack(callIndirect([], [], op('i32.shr_u', word(record.first, get(at)), i32(functionShift)))),
          ]),
        ]
      : []),
    set(value, real(record.factor, get(at))),
    set(entry, subtract(word(record.first, get(at)), i32(lawKind.orders))),
    set(end, word(record.second, get(at))),
    each(entry, get(end), order.bytes, [
      set(count, real(0, word(order.place, get(entry)))),
      set(steps, word(order.count, get(entry))),
      set(step, zero),
      each(step, get(steps), 1, [
        set(value, op('f64.mul', get(value), op('f64.sub', get(count), op('f64.convert_i32_s', get(step))))),
        when(op('i32.gt_s', get(steps), i32(largestHoistedOrder)), [
          set(value, op('f64.div', get(value), op('f64.convert_i32_s', add(get(step), i32(1))))),
        ]),
      ]),
    ]),
    giveBack(get(value)),
  );
}

/** The functions that a refresh calls where something rare happens. */
interface RareFunctions {
  otherLaw: Callable<'f64'>;
  activate: Callable<'none'>;
  deactivate: Callable<'none'>;
}

function refreshFunction(
  layout: GroupLayout,
  module: ModuleBuilder,
  reactions: number,
  rare: RareFunctions,
): FunctionBuilder<'i32'> {
  const fn = module.function(
    'refresh',
    [
      ['entry', 'i32'],
      ['end', 'i32'],
    ],
    'i32',
  );
  const [entry, end] = [fn.parameter(0, 'i32'), fn.parameter(1, 'i32')];
  const builder = fn as unknown as FunctionBuilder;
  return fn.emit(
    emitRefreshList({ layout, fn: builder, reactions, rare, entry, end: get(end), bad: [giveBack(i32(1))] }),
    giveBack(zero),
  );
}

/** Works out the propensities of the records listed from `entry` to before `end`, and moves them between groups. */
function emitRefreshList(options: {
  layout: GroupLayout;
  fn: FunctionBuilder;
  reactions: number;
  rare: RareFunctions;
  entry: Local<'i32'>;
  end: Node<'i32'>;
  bad: Node[];
}): Node {
  const { layout, fn, entry, end, bad } = options;
  const { half, mask } = roundingBits(options.reactions);
  const { otherLaw, activate, deactivate } = options.rare;
  const at = fn.local('i32', 'record');
  const first = fn.local('i32', 'first');
  const kind = fn.local('i32', 'kind');
  const value = fn.local('f64', 'propensity');
  const old = fn.local('f64', 'oldPropensity');
  const oldGroup = fn.local('i32', 'oldGroup');
  const newGroup = fn.local('i32', 'newGroup');
  const size = fn.local('i32', 'size');
  const place = fn.local('i32', 'place');
  const last = fn.local('i32', 'last');
  const moved = fn.local('i32', 'moved');
  const page = fn.local('i32', 'page');

  const groupOf = (propensity: Local<'f64'>): Node<'i32'> =>
    add(
      i32(layout.groups),
      op(
        'i32.mul',
        op('i32.wrap_i64', op('i64.shr_u', op('i64.reinterpret_f64', get(propensity)), i64(52n))),
        i32(group.bytes),
      ),
    );
  const addToSum = (target: Local<'i32'>, difference: Node<'f64'>): Node =>
    setReal(group.sum, get(target), op('f64.add', real(group.sum, get(target)), difference));
  const product = op(
    'f64.mul',
    op('f64.mul', real(record.factor, get(at)), real(0, subtract(get(first), get(kind)))),
    op('f64.sub', real(0, word(record.second, get(at))), op('f64.convert_i32_s', get(kind))),
  );
  const rounded = op(
    'f64.reinterpret_i64',
    op('i64.and', op('i64.add', op('i64.reinterpret_f64', get(value)), i64(half)), i64(mask)),
  );
  const freeTop = add(i32(layout.freePages), op('i32.shl', word(layout.freeCount), i32(2)));

  const takeOut: Node[] = [
    set(size, subtract(word(group.size, get(oldGroup)), i32(1))),
    setWord(group.size, get(oldGroup), get(size)),
    set(last, add(word(0, pageEntry(oldGroup, size)), offsetInPage(size))),
    set(moved, word(0, get(last))),
    set(place, word(record.member, get(at))),
    setWord(0, get(place), get(moved)),
    setWord(record.member, get(moved), get(place)),
    addToSum(oldGroup, op('f64.neg', get(old))),
    // The first place of a page became free, and with it the page.
    when(op('i32.eqz', placeInPage(size)), [
      setWord(0, freeTop, get(last)),
      setWord(layout.freeCount, zero, add(word(layout.freeCount), i32(1))),
      when(op('i32.eqz', get(size)), [call(deactivate, get(oldGroup))]),
    ]),
  ];
  const putIn: Node[] = [
    set(size, word(group.size, get(newGroup))),
    set(page, pageEntry(newGroup, size)),
    when(op('i32.eqz', placeInPage(size)), [
      when(op('i32.eqz', get(size)), [call(activate, get(newGroup))]),
      setWord(layout.freeCount, zero, subtract(word(layout.freeCount), i32(1))),
      setWord(0, get(page), word(0, freeTop)),
    ]),
    set(place, add(word(0, get(page)), offsetInPage(size))),
    setWord(0, get(place), get(at)),
    setWord(record.member, get(at), get(place)),
    setWord(group.size, get(newGroup), add(get(size), i32(1))),
    addToSum(newGroup, get(value)),
  ];
  return each(entry, end, 4, [
    set(at, word(0, get(entry))),
    set(first, word(record.first, get(at))),
    set(kind, kindOf(get(first))),
    when(op('i32.le_u', get(kind), i32(lawKind.pairs)), [set(value, product)], [set(value, call(otherLaw, get(at)))]),
    when(
      op('i32.eqz', op('i32.and', op('f64.ge', get(value), f64(0)), op('f64.le', get(value), f64(largestTotal)))),
      bad,
    ),
    set(value, rounded),
    set(value, select(get(value), f64(0), op('f64.ge', get(value), f64(leastPropensity)))),
    set(old, real(record.propensity, get(at))),
    when(op('f64.ne', get(value), get(old)), [
      setReal(record.propensity, get(at), get(value)),
      set(oldGroup, groupOf(old)),
      set(newGroup, groupOf(value)),
      when(
        op('i32.eq', get(oldGroup), get(newGroup)),
        [addToSum(newGroup, op('f64.sub', get(value), get(old)))],
        [when(op('f64.ne', get(old), f64(0)), takeOut), when(op('f64.ne', get(value), f64(0)), putIn)],
      ),
    ]),
  ]);
}
