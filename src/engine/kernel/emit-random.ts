/** The generator of a replicate as generated code: seeding, xoshiro256++ steps and the two uniforms of a step, in either width. */
import { firstMultiplier, goldenGamma, secondMultiplier } from '../random/splitmix64.ts';
import type { Lanes, Real, Width, Word } from './lanes.ts';
import type { FunctionBuilder, ModuleBuilder } from './wasm/module-builder.ts';
import { call, get, giveBack, i64, op, set, type Local, type Node } from './wasm/node.ts';

export interface GeneratorLocals<W extends Width> {
  state: Local<Word<W>>[];
  output: Local<Word<W>>;
  shifted: Local<Word<W>>;
}

export function generatorLocals<W extends Width>(lanes: Lanes<W>, fn: FunctionBuilder): GeneratorLocals<W> {
  const word = (name: string): Local<Word<W>> => fn.local(lanes.wordType, name) as Local<Word<W>>;
  return { state: ['s0', 's1', 's2', 's3'].map(word), output: word('output'), shifted: word('shifted') };
}

/** One step: the output into `locals.output`. */
export function emitNext<W extends Width>(lanes: Lanes<W>, locals: GeneratorLocals<W>): Node[] {
  const { output, shifted } = locals;
  const [s0, s1, s2, s3] = locals.state as [Local<Word<W>>, Local<Word<W>>, Local<Word<W>>, Local<Word<W>>];
  const xorInto = (target: Local<Word<W>>, value: Local<Word<W>>): Node =>
    set(target, lanes.xorWords(get(target), get(value)));
  return [
    set(shifted, lanes.addWords(get(s0), get(s3))),
    set(output, lanes.addWords(lanes.rotateLeft(get(shifted), 23), get(s0))),
    set(shifted, lanes.shiftLeft(get(s1), 17)),
    xorInto(s2, s0),
    xorInto(s3, s1),
    xorInto(s1, s2),
    xorInto(s0, s3),
    xorInto(s2, shifted),
    set(s3, lanes.rotateLeft(get(s3), 45)),
  ];
}

/** 1 + u with u the 52-bit uniform of a generator's output: the output's upper bits as the fraction of a double in [1, 2). */
export const onePlusUniform = <W extends Width>(lanes: Lanes<W>, output: Node<Word<W>>): Node<Real<W>> =>
  lanes.realOf(lanes.orWords(lanes.shiftRight(output, 12), lanes.word(0x3ff0000000000000n)));

const mixFunction = (module: ModuleBuilder): FunctionBuilder<'i64'> =>
  module.shared('mix64', () => {
    const fn = module.function('mix64', [['z', 'i64']], 'i64');
    const z = fn.parameter(0, 'i64');
    const folded = (by: bigint): Node<'i64'> => op('i64.xor', get(z), op('i64.shr_u', get(z), i64(by)));
    return fn.emit(
      set(z, op('i64.mul', folded(30n), i64(firstMultiplier))),
      set(z, op('i64.mul', folded(27n), i64(secondMultiplier))),
      giveBack(folded(31n)),
    );
  });

/** Statements that give `state` the four SplitMix64 outputs of mix64(key). */
export function emitSeeding(
  module: ModuleBuilder,
  fn: FunctionBuilder,
  state: Local<'i64'>[],
  key: Node<'i64'>,
): Node[] {
  const mix = mixFunction(module);
  const counter = fn.local('i64', 'counter');
  const statements: Node[] = [set(counter, call(mix, key))];
  for (const word of state)
    statements.push(set(counter, op('i64.add', get(counter), i64(goldenGamma))), set(word, call(mix, get(counter))));
  return statements;
}
