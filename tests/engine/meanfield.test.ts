/** The mean field against solutions known in closed form or published. */
import poisson from '@stdlib/stats-base-dists-poisson';
import { describe, expect, it } from 'vitest';
import { conservedTotals } from '@/domain/network/conserved-totals.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import type { ResolvedNetwork, ResolvedReaction } from '@/domain/network/resolved.ts';
import { meanField, type MeanFieldOptions } from '@/engine/meanfield/mean-field.ts';
import {
  binary,
  birthDeath,
  decayingDimerising,
  dimerisation,
  enzyme,
  epidemic,
  immigrationDeath,
  isomerisation,
  network,
  number,
  pureDeath,
  species,
  twoStageExpression,
} from '@tests/factories/networks.ts';

const solve = (options: MeanFieldOptions) => {
  const solution = meanField(options);
  if (!solution.ok) throw new Error(solution.message);
  return { ...solution, of: (id: string) => solution.observables.find((one) => one.id === id)!.values };
};
const endOf = (model: ResolvedNetwork, horizon: number, id: string, tolerance = 1e-9): number =>
  solve({
    network: model,
    horizon,
    gridIntervals: 1,
    relativeTolerance: tolerance,
    absoluteTolerance: tolerance,
  }).of(id)[1]!;
const resolved = (document: NetworkDocument): ResolvedNetwork => {
  const outcome = resolveNetwork(document);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.network;
};

describe('meanField on linear networks, whose mean it is exactly', () => {
  // The mean of a network with first-order reactions obeys the rate equations (van Kampen, Stochastic Processes in Physics
  // and Chemistry, ch. VII; from memory). Values recomputed outside the project to the digits shown.
  it.each([
    ['immigration-death, Poisson mean (Bailey 1964 ch. 8)', immigrationDeath(), 10, 'X', 63.2120558829],
    ['immigration-death from 150 (same)', immigrationDeath(10, 0.1, 150), 10, 'X', 118.393972059],
    ['linear birth-death (Kendall 1948, Ann. Math. Stat. 19:1)', birthDeath(1, 0.5, 5), 2, 'X', 13.5914091423],
    ['pure death (Bailey 1964 §8.5)', pureDeath(0.5, 100), 1, 'X', 60.6530659713],
    ['isomerisation (Darvey & Staff 1966, J. Chem. Phys. 44:990)', isomerisation(1, 0.5, 50), 1, 'B', 25.8956613284],
    [
      'two-stage expression (Thattai & van Oudenaarden 2001, PNAS 98:8614)',
      twoStageExpression(),
      5,
      'protein',
      2.62357925,
    ],
  ] as const)('%s (citation from memory; value recomputed)', (_name, model, horizon, id, expected) => {
    expect(Math.abs(endOf(model, horizon, id) / expected - 1)).toBeLessThan(5e-9);
  });

  it('moves along a chain of 300 species as a Poisson law: x_k(t) = N·e^(−t)·t^k/k!', () => {
    const ids = Array.from({ length: 300 }, (_, index) => `X${index}`);
    const chain = network({
      counts: Object.fromEntries(ids.map((id, index) => [id, index === 0 ? 1e6 : 0])),
      reactions: ids.slice(1).map((id, index) => ({ consumes: { [ids[index]!]: 1 }, produces: { [id]: 1 }, rate: 1 })),
    });
    const solution = solve({ network: chain, horizon: 8, gridIntervals: 1 });
    expect(solution.method).toBe('rosenbrock');
    for (const index of [0, 3, 8, 15, 30, 60]) {
      expect(Math.abs(solution.of(`X${index}`)[1]! - 1e6 * poisson.pmf(index, 8))).toBeLessThan(5);
    }
  });
});

describe('meanField on nonlinear networks', () => {
  it('follows the logistic law K/(1 + (K/x0 − 1)·e^(−rt)) for X → 2X, 2X → X, with K = 2r/c', () => {
    // Verhulst 1838; the closed form is elementary. c·x(x − 1)/2 becomes c·x²/2.
    const [r, c, start] = [0.8, 0.004, 12];
    const logistic = network({
      counts: { X: start },
      reactions: [
        { consumes: { X: 1 }, produces: { X: 2 }, rate: r },
        { consumes: { X: 2 }, produces: { X: 1 }, rate: c },
      ],
    });
    const capacity = (2 * r) / c;
    const { times, of } = solve({ network: logistic, horizon: 20, gridIntervals: 200, relativeTolerance: 1e-8 });
    times.forEach((time, index) => {
      const expected = capacity / (1 + (capacity / start - 1) * Math.exp(-r * time));
      expect(Math.abs(of('X')[index]! / expected - 1)).toBeLessThan(2e-7);
    });
  });

  it('follows second-order decay x0/(1 + c·x0·t) for 2A → ∅', () => {
    const decay = network({ counts: { A: 1_000 }, reactions: [{ consumes: { A: 2 }, rate: 0.01 }] });
    expect(Math.abs(endOf(decay, 30, 'A') / (1_000 / (1 + 0.01 * 1_000 * 30)) - 1)).toBeLessThan(1e-7);
  });

  it('matches the decaying-dimerising set solved by another program, and its ensemble means within their errors', () => {
    // The system: Gillespie 2001, J. Chem. Phys. 115:1716 (citation from memory). Rate equations solved with SciPy 1.17, Radau
    // and LSODA at 1e−12, which agree to the digits shown; means ± SE from 8,000 exact runs of a separate program.
    const { of } = solve({ network: decayingDimerising(), horizon: 10, gridIntervals: 10 });
    const expected = { S1: 2418.60641147, S2: 13959.36039168, S3: 13512.88613848 };
    const means = { S1: [2418.36, 0.56], S2: [13958.05, 1.02], S3: [13513.28, 0.94] };
    for (const id of ['S1', 'S2', 'S3'] as const) {
      expect(Math.abs(of(id)[10]! / expected[id] - 1)).toBeLessThan(3e-6);
      // 4 standard errors for three comparisons: a false alarm in 5,000, were the two equal; counts are large enough.
      expect(Math.abs(of(id)[10]! - means[id][0]!)).toBeLessThan(4 * means[id][1]!);
    }
  });

  it('settles where both directions of a dimerisation balance, and departs from the exact mean as 1/N', () => {
    // Exact: π(b) ∝ (c1/2c2)^b/((N−2b)!·b!) (McQuarrie 1967, J. Appl. Prob. 4:413; citation from memory; value
    // recomputed: mean 36.4591723215 at N = 100). Relative departure falls as 1/volume: common practice.
    const departures = [1, 4, 16].map((volume) => {
      const [total, association, dissociation] = [100 * volume, 0.001 / volume, 0.01];
      const exact = exactMeanOfDimers(total, association, dissociation);
      if (volume === 1) expect(exact).toBeCloseTo(36.4591723215, 9);
      // Balance c1·p²/2 = c2·b with p = N − 2b, solved as a quadratic in p.
      const ratio = association / dissociation;
      const monomers = (-1 + Math.sqrt(1 + 4 * ratio * total)) / (2 * ratio);
      const settled = endOf(dimerisation(association, dissociation, total), 5_000, 'P2');
      expect(Math.abs(settled / ((total - monomers) / 2) - 1)).toBeLessThan(1e-8);
      return Math.abs(exact - settled) / settled;
    });
    expect(departures[0]!).toBeGreaterThan(1e-4);
    expect(departures[0]! / departures[1]!).toBeCloseTo(4, 0);
    expect(departures[1]! / departures[2]!).toBeCloseTo(4, 1);
  });

  it('reaches the final size of an epidemic, s = e^(−R0·(1 − s)) of those susceptible at the start', () => {
    // Kermack & McKendrick 1927, Proc. R. Soc. A 115:700 (citation from memory); one infected among many adds 1/S0 to 1 − s.
    const [susceptible, infected, beta] = [99_999, 1, 2];
    const left = endOf(epidemic(susceptible, infected, beta, 1), 200, 'S') / susceptible;
    const people = susceptible + infected;
    const expected = Math.exp((-beta * (people - left * susceptible)) / people);
    expect(Math.abs(left / expected - 1)).toBeLessThan(1e-7);
  });
});

/** Mean number of dimers in equilibrium, by the ratios of neighbouring probabilities. */
function exactMeanOfDimers(total: number, association: number, dissociation: number): number {
  let [weight, sum, first] = [1, 1, 0];
  for (let b = 1; 2 * b <= total; b++) {
    const monomers = total - 2 * (b - 1);
    weight *= (association * monomers * (monomers - 1)) / (2 * dissociation * b);
    sum += weight;
    first += b * weight;
    if (sum > 1e250) [weight, sum, first] = [weight / 1e250, sum / 1e250, first / 1e250];
  }
  return first / sum;
}

describe('the error control of meanField', () => {
  it('makes the error follow the tolerance, and the work grow slowly', () => {
    const truth = endOf(enzyme(1_000, 20, 0.02, 0.3, 5), 40, 'P', 1e-12);
    const runs = [1e-3, 1e-5, 1e-7, 1e-9].map((tolerance) => {
      const solution = solve({
        network: enzyme(1_000, 20, 0.02, 0.3, 5),
        horizon: 40,
        gridIntervals: 1,
        relativeTolerance: tolerance,
        absoluteTolerance: tolerance,
      });
      return { tolerance, error: Math.abs(solution.of('P')[1]! / truth - 1), steps: solution.steps };
    });
    for (const { tolerance, error } of runs) expect(error).toBeLessThan(10 * tolerance);
    for (const [index, run] of runs.slice(1).entries()) {
      expect(run.error).toBeLessThan(runs[index]!.error / 8);
      // Order 4: a hundredth of the error takes 100^(1/4) ≈ 3.2 times the steps.
      expect(run.steps).toBeLessThan(5 * runs[index]!.steps);
    }
  });

  it('is as accurate between its steps as at their ends', () => {
    const { times, of } = solve({ network: immigrationDeath(), horizon: 50, gridIntervals: 997 });
    times.forEach((time, index) => {
      const expected = 100 * -Math.expm1(-0.1 * time);
      expect(Math.abs(of('X')[index]! - expected)).toBeLessThan(1e-6 + 2e-5 * expected);
    });
  });

  it('keeps every conserved total of a network to round-off at every grid time', () => {
    for (const model of [enzyme(1_000, 20), dimerisation(0.001, 0.01, 1_000), epidemic(990, 10, 2, 1)]) {
      const totals = conservedTotals(model)!;
      expect(totals.length).toBeGreaterThan(0);
      const { observables } = solve({ network: model, horizon: 30, gridIntervals: 50 });
      for (const { terms, total } of totals) {
        for (let index = 0; index <= 50; index++) {
          const sum = terms.reduce(
            (s, { species, weight }) => s + Number(weight) * observables[species]!.values[index]!,
            0,
          );
          expect(Math.abs(sum / Number(total) - 1)).toBeLessThan(1e-12);
        }
      }
    }
  });

  it('gives the same digits every time', () => {
    const run = () => solve({ network: decayingDimerising(), horizon: 10, gridIntervals: 20 }).observables;
    expect(run()).toEqual(run());
  });
});

describe('meanField on a network too entangled to factorise', () => {
  it('goes on explicitly, keeping the total and staying between the extremes of the start', () => {
    // Diffusion on a random graph of 2,500 places: the maximum principle holds for any such exchange.
    const places = 2_500;
    let draw = 7;
    const nextPlace = (): number => {
      draw = (draw * 1_103_515_245 + 12_345) % 2 ** 31;
      return Math.floor((draw / 2 ** 31) * places);
    };
    const move = (from: number, to: number, index: number): ResolvedReaction => ({
      id: `R${index}`,
      reactants: [{ species: from, count: 1 }],
      changes: [
        { species: from, count: -1 },
        { species: to, count: 1 },
      ],
      law: { kind: 'massAction', constant: { kind: 'number', value: 1 } },
    });
    const species = Array.from({ length: places }, (_, index) => ({
      id: `X${index}`,
      initialCount: 100 + (index % 100),
      boundary: false,
    }));
    const graph: ResolvedNetwork = {
      species,
      parameters: [],
      assignments: [],
      reactions: Array.from({ length: 2 * places }, () => [nextPlace(), nextPlace()] as const)
        .filter(([from, to]) => from !== to)
        .flatMap(([from, to], index) => [move(from, to, 2 * index), move(to, from, 2 * index + 1)]),
      observables: species.map(({ id }, index) => ({ id, expression: { kind: 'species', index } })),
    };
    const counts = species.map(({ initialCount }) => initialCount);
    const { method, observables } = solve({ network: graph, horizon: 1, gridIntervals: 1 });
    expect(method).toBe('explicit');
    const ends = observables.map(({ values }) => values[1]!);
    const total = (values: number[]): number => values.reduce((sum, value) => sum + value, 0);
    expect(Math.abs(total(ends) / total(counts) - 1)).toBeLessThan(1e-12);
    expect(Math.min(...ends)).toBeGreaterThanOrEqual(100);
    expect(Math.max(...ends)).toBeLessThanOrEqual(199);
    expect(Math.max(...ends) - Math.min(...ends)).toBeLessThan(98);
  });
});

describe('meanField with rules, changes and guards', () => {
  it('evaluates assignment rules and observables along the way', () => {
    // dX/dt = −k·X with k = 0.5 by a rule, so X = 80·e^(−t/2).
    const model = resolved({
      species: [{ id: 'X', initialCount: 80 }],
      parameters: [
        { id: 'half', value: 0 },
        { id: 'per_molecule', value: 0 },
      ],
      assignmentRules: [
        { variable: 'half', expression: '1 / 2' },
        { variable: 'per_molecule', expression: 'half * X' },
      ],
      reactions: [{ id: 'decay', equation: 'X → ∅', rateLaw: { kind: 'expression', expression: 'per_molecule' } }],
      observables: [{ id: 'twice', expression: '2 * X' }],
    });
    const { of } = solve({ network: model, horizon: 4, gridIntervals: 4, relativeTolerance: 1e-9 });
    [0, 1, 2, 3, 4].forEach((time) => {
      expect(of('X')[time]!).toBeCloseTo(80 * Math.exp(-time / 2), 6);
      expect(of('twice')[time]!).toBe(2 * of('X')[time]!);
    });
  });

  it('empties a queue served at a constant rate and keeps it at its floor, where the guard balances arrivals', () => {
    // Arrivals 2, service 3 while anyone is there: 20 − t until t = 20, then the traffic intensity 2/3 of the last
    // thousandth of a molecule, which is how the guard says "busy two thirds of the time".
    const queue = resolved({
      species: [{ id: 'Q', initialCount: 20 }],
      reactions: [
        { id: 'arrive', equation: '∅ → Q', rateLaw: { kind: 'expression', expression: '2' } },
        { id: 'serve', equation: 'Q → ∅', rateLaw: { kind: 'expression', expression: '3' } },
      ],
    });
    const { of, steps } = solve({ network: queue, horizon: 100, gridIntervals: 10 });
    expect(of('Q')[1]).toBeCloseTo(10, 9);
    for (const index of [3, 5, 10]) expect(of('Q')[index]).toBeCloseTo(2e-3 / 3, 8);
    expect(steps).toBeLessThan(200);
  });

  it('applies timed changes at their times, in document order, and records the state after them', () => {
    const dose = (time: number, amount: number) => ({
      time,
      apply: ({ counts }: { counts: Float64Array }) => {
        counts[0]! += amount;
      },
    });
    const timedChanges = [
      dose(2, 100),
      dose(0, 50),
      {
        time: 2,
        apply: ({ counts, parameters }: { counts: Float64Array; parameters: Float64Array }) => {
          counts[0]! *= 2;
          parameters[0] = 1;
        },
      },
      dose(9, 1),
    ];
    const { of } = solve({
      network: pureDeath(0.5, 0),
      horizon: 4,
      gridIntervals: 4,
      relativeTolerance: 1e-9,
      timedChanges,
    });
    const doubled = 2 * (50 * Math.exp(-1) + 100);
    [50, 50 * Math.exp(-0.5), doubled, doubled * Math.exp(-1), doubled * Math.exp(-2)].forEach((expected, index) => {
      expect(of('X')[index]).toBeCloseTo(expected, 5);
    });
  });

  it('crosses a jump of a law within the tolerance: made at 2 below 50 molecules and at 1 above, 75 at time 50', () => {
    const model = resolved({
      species: [{ id: 'X', initialCount: 0 }],
      reactions: [
        { id: 'make', equation: '∅ → X', rateLaw: { kind: 'expression', expression: 'piecewise(2, X < 50, 1)' } },
      ],
    });
    const { of } = solve({ network: model, horizon: 50, gridIntervals: 4 });
    [0, 25, 50, 62.5, 75].forEach((expected, index) => expect(Math.abs(of('X')[index]! - expected)).toBeLessThan(2e-3));
  });

  it('keeps a network without any rate where it is', () => {
    const { of } = solve({ network: pureDeath(0, 7), horizon: 1e9, gridIntervals: 3 });
    expect(of('X')).toEqual([7, 7, 7, 7]);
  });
});

describe('meanField refuses', () => {
  const model = immigrationDeath();

  it.each([
    ['a horizon of 0', { horizon: 0 }],
    ['a horizon that is no number', { horizon: NaN }],
    ['an endless horizon', { horizon: Infinity }],
    ['no grid', { gridIntervals: 0 }],
    ['half an interval', { gridIntervals: 1.5 }],
    ['a grid beyond the limit', { gridIntervals: 1e9 }],
    ['a tolerance of 0', { relativeTolerance: 0 }],
    ['a tolerance below round-off', { relativeTolerance: 1e-17 }],
    ['a negative absolute tolerance', { absoluteTolerance: -1 }],
    ['a budget that is no number', { stepBudget: NaN }],
    ['a change before time 0', { timedChanges: [{ time: -1, apply: () => {} }] }],
    [
      'a change to a negative count',
      { timedChanges: [{ time: 1, apply: ({ counts }: { counts: Float64Array }) => counts.fill(-1) }] },
    ],
  ])('%s', (_name, options) => {
    expect(meanField({ network: model, horizon: 10, gridIntervals: 10, ...options })).toMatchObject({
      ok: false,
      reason: 'invalid_request',
    });
  });

  it('a count that runs away in finite time, saying when: x0/(1 − c·x0·t/2) for 2X → 3X blows up at 2/(c·x0)', () => {
    const explosion = network({ counts: { X: 20 }, reactions: [{ consumes: { X: 2 }, produces: { X: 3 }, rate: 1 }] });
    const failure = meanField({ network: explosion, horizon: 5, gridIntervals: 5 });
    expect(failure).toMatchObject({ ok: false, reason: 'step_too_small' });
    if (!failure.ok) expect(failure.time).toBeCloseTo(0.1, 6);
  });

  it('a law that stops having a value, naming reaction, time and state', () => {
    // sqrt(X − 50) has none once X = 100·e^(−t) falls below 50, at ln 2.
    const broken = resolved({
      species: [
        { id: 'X', initialCount: 100 },
        { id: 'Y', initialCount: 0 },
      ],
      reactions: [
        { id: 'decay', equation: 'X → ∅', rateLaw: { kind: 'massAction', constant: '1' } },
        { id: 'watch', equation: '∅ → Y', rateLaw: { kind: 'expression', expression: 'sqrt(X - 50)' } },
      ],
    });
    const failure = meanField({ network: broken, horizon: 5, gridIntervals: 5 });
    expect(failure).toMatchObject({ ok: false, reason: 'not_a_number', reaction: 'watch' });
    if (failure.ok) return;
    expect(failure.time).toBeCloseTo(Math.LN2, 3);
    expect(failure.state['X']).toBeCloseTo(50, 1);
  });

  it('to go on when its budget is used up', () => {
    const options = { network: decayingDimerising(), horizon: 10, gridIntervals: 10 };
    expect(meanField({ ...options, stepBudget: 5 })).toMatchObject({ ok: false, reason: 'step_budget' });
    expect(meanField({ ...options, operationBudget: 1_000 })).toMatchObject({ ok: false, reason: 'work_budget' });
  });
});

describe('changes of the network', () => {
  const dosed: ResolvedNetwork = {
    ...immigrationDeath(10, 0.1, 0),
    changes: [
      {
        id: 'dose',
        when: { kind: 'times', times: [5] },
        sets: [{ target: { kind: 'species', index: 0 }, expression: binary('add', species(0), number(40)) }],
      },
    ],
  };

  it('are made at their times: x(10) = 100 (1 − e^−1) + 40 e^−0.5 for a dose of 40 at 5 (linear equation, by hand)', () => {
    const solution = meanField({ network: dosed, horizon: 10, gridIntervals: 10 });
    if (!solution.ok) throw new Error(solution.message);
    expect(solution.observables[0]!.values.at(-1)).toBeCloseTo(100 * (1 - Math.exp(-1)) + 40 * Math.exp(-0.5), 3);
    expect(solution.observables[0]!.values[5]).toBeCloseTo(100 * (1 - Math.exp(-0.5)) + 40, 3);
  });

  it('that wait for a condition are refused by name', () => {
    const { sets } = dosed.changes![0]!;
    const condition = binary('less', species(0), number(5));
    const waiting = {
      ...dosed,
      changes: [{ id: 'low', when: { kind: 'condition' as const, condition, before: true }, sets }],
    };
    expect(meanField({ network: waiting, horizon: 10, gridIntervals: 1 })).toMatchObject({
      ok: false,
      reason: 'triggered_change',
      message: expect.stringContaining('low'),
    });
  });
});
