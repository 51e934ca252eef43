/** The elementary functions: TypeScript and generated code agree bit for bit, and both are close to the host's functions. */
import { beforeAll, describe, expect, it } from 'vitest';
import { Xoshiro256, uniform53 } from '../../random/xoshiro256.ts';
import { splitMix64 } from '../../random/splitmix64.ts';
import { encodeModule } from '../wasm/encode-module.ts';
import { ModuleBuilder, type FunctionBuilder } from '../wasm/module-builder.ts';
import { call, get, giveBack } from '../wasm/node.ts';
import { decimalLogarithm, decimalLogarithmFunction } from './decimal-logarithm.ts';
import { bitsOf } from './double-bits.ts';
import { exponential, exponentialFunction } from './exponential.ts';
import { logarithm, logarithmFunction } from './logarithm.ts';
import { power, powerFunction } from './power.ts';

let generated: Record<'ln' | 'exp' | 'log10' | 'pow', (x: number, y?: number) => number>;

beforeAll(async () => {
  const module = new ModuleBuilder();
  const exportOf = (name: string, target: FunctionBuilder<'f64'>): void => {
    const fn = module.function(
      name,
      target.takes.map((type, i) => [`x${i}`, type] as const),
      'f64',
      { exported: true },
    );
    fn.emit(giveBack(call(target, ...target.takes.map((_, i) => get(fn.parameter(i, 'f64'))))));
  };
  exportOf('ln', logarithmFunction(module));
  exportOf('exp', exponentialFunction(module));
  exportOf('log10', decimalLogarithmFunction(module));
  exportOf('pow', powerFunction(module));
  const memory = new WebAssembly.Memory({ initial: 1 });
  const { instance } = await WebAssembly.instantiate(encodeModule(module), { env: { memory } });
  generated = instance.exports as typeof generated;
});

const generator = new Xoshiro256(splitMix64(2026n, 4));
const uniform = (): number => uniform53(generator.next());
const special = [
  0,
  -0,
  1,
  -1,
  2,
  0.5,
  10,
  1000,
  1e-320,
  5e-324,
  2 ** -1022,
  1e308,
  Infinity,
  -Infinity,
  NaN,
  -2.5,
  3,
  -3,
];
/** Doubles of every magnitude and both signs, and of ordinary size. */
const anyDoubles = Array.from({ length: 20_000 }, (_, i) =>
  i % 2 ? (uniform() - 0.5) * 2000 : (uniform() - 0.5) * 2 ** Math.floor((uniform() - 0.5) * 2000),
).concat(special);

const differentBits = (a: number, b: number): boolean =>
  !(Number.isNaN(a) && Number.isNaN(b)) && bitsOf(a) !== bitsOf(b);
/** |a − b| in units of the last place of b. */
function unitsApart(a: number, b: number): number {
  if (Object.is(a, b) || a === b || (Number.isNaN(a) && Number.isNaN(b))) return 0;
  if (!Number.isFinite(a) || !Number.isFinite(b)) return Infinity;
  const unit = Math.max(2 ** -1074, 2 ** (Math.floor(Math.log2(Math.abs(b))) - 52));
  return Math.abs(a - b) / unit;
}
const worst = (pairs: [number, number][]): number => Math.max(...pairs.map(([a, b]) => unitsApart(a, b)));

describe('one-place functions', () => {
  const cases = [
    ['ln', logarithm, Math.log, 1.5],
    ['exp', exponential, Math.exp, 1.5],
    ['log10', decimalLogarithm, Math.log10, 2],
  ] as const;
  for (const [name, ours, hosts, units] of cases) {
    it(`${name} gives the same bits in TypeScript and in the module`, () => {
      expect(anyDoubles.filter((x) => differentBits(generated[name](x), ours(x)))).toEqual([]);
    });
    it(`${name} is within ${units} units in the last place of the host's`, () => {
      expect(worst(anyDoubles.map((x) => [ours(x), hosts(x)]))).toBeLessThanOrEqual(units);
    });
  }

  it('log10 of a whole power of ten is whole', () => {
    for (let exponent = -20; exponent <= 20; exponent++)
      expect(decimalLogarithm(Number(`1e${exponent}`))).toBe(exponent);
  });
});

describe('power', () => {
  const pairs = Array.from({ length: 20_000 }, (_, i): [number, number] =>
    i % 3 === 0 ? [uniform() * 100, uniform() * 8] : [uniform() * 2 ** (uniform() * 40 - 20), (uniform() - 0.5) * 60],
  );
  const specialPairs = special.flatMap((x) => special.map((y): [number, number] => [x, y]));
  const wholePairs = Array.from({ length: 5_000 }, (_, i): [number, number] => [(uniform() - 0.5) * 50, (i % 60) - 30]);

  it('gives the same bits in TypeScript and in the module', () => {
    const all = [...pairs, ...specialPairs, ...wholePairs];
    expect(all.filter(([x, y]) => differentBits(generated.pow(x, y), power(x, y)))).toEqual([]);
  });

  it('is within 2 units in the last place of the exact value, and within 9 for whole exponents by squaring', () => {
    expect(worst(pairs.map(([x, y]) => [power(x, y), x ** y]))).toBeLessThanOrEqual(2.5);
    expect(worst(wholePairs.map(([x, y]) => [power(x, y), x ** y]))).toBeLessThanOrEqual(10);
  });

  it('agrees with ECMAScript on special values, up to the sign of zero and roots of −∞', () => {
    const roots = ([x, y]: [number, number]): boolean => x === -Infinity && Number.isFinite(y) && !Number.isInteger(y);
    const positiveZero = (x: number): number => (x === 0 ? 0 : x);
    const off = specialPairs.filter(
      ([x, y]) => !roots([x, y]) && !(unitsApart(positiveZero(power(x, y)), positiveZero(x ** y)) <= 10),
    );
    expect(off).toEqual([]);
  });
});
