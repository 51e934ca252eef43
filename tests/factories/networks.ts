/** Networks for tests, in the engine's resolved form: the systems whose laws are known in closed form, and random ones. */
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedNetwork, ResolvedReaction } from '@/domain/network/resolved.ts';

export const parameter = (index: number): Expression => ({ kind: 'parameter', index });
export const species = (index: number): Expression => ({ kind: 'species', index });
export const number = (value: number): Expression => ({ kind: 'number', value });
export const binary = (
  operator: Extract<Expression, { kind: 'binary' }>['operator'],
  left: Expression,
  right: Expression,
): Expression => ({ kind: 'binary', operator, left, right });

/** How many of each species, by id: { A: 2 }. */
type Amounts = Record<string, number>;

export interface ReactionSketch {
  id?: string;
  consumes?: Amounts;
  produces?: Amounts;
  /** A number makes a mass-action constant of its own parameter; an expression is a law kept verbatim. */
  rate: number | Expression;
}

export interface NetworkSketch {
  counts: Amounts;
  boundary?: string[];
  reactions: ReactionSketch[];
  parameters?: Record<string, number>;
  assignments?: ResolvedNetwork['assignments'];
  observables?: ResolvedNetwork['observables'];
}

/** A resolved network from a sketch; parameters named in `parameters` come first, then the mass-action constants. */
export function network(sketch: NetworkSketch): ResolvedNetwork {
  const ids = Object.keys(sketch.counts);
  const boundary = new Set(sketch.boundary);
  const parameters = Object.entries(sketch.parameters ?? {}).map(([id, value]) => ({ id, value }));
  const places = new Map(ids.map((id, index) => [id, index]));
  const amounts = (given: Amounts = {}): { species: number; count: number }[] =>
    Object.entries(given).map(([id, count]) => ({ species: places.get(id)!, count }));
  const reactions = sketch.reactions.map(({ id, consumes, produces, rate }, index): ResolvedReaction => {
    const changes = [...new Set([...Object.keys(consumes ?? {}), ...Object.keys(produces ?? {})])]
      .map((name) => ({
        species: places.get(name)!,
        count: boundary.has(name) ? 0 : (produces?.[name] ?? 0) - (consumes?.[name] ?? 0),
      }))
      .filter(({ count }) => count !== 0)
      .sort((a, b) => a.species - b.species);
    const name = id ?? `R${index + 1}`;
    if (typeof rate !== 'number')
      return { id: name, reactants: amounts(consumes), changes, law: { kind: 'expression', expression: rate } };
    const constant = parameter(parameters.push({ id: `k${index + 1}`, value: rate }) - 1);
    return { id: name, reactants: amounts(consumes), changes, law: { kind: 'massAction', constant } };
  });
  const counted = ids.map((id, index) => ({ id, expression: species(index) }));
  return {
    species: ids.map((id) => ({ id, initialCount: sketch.counts[id]!, boundary: boundary.has(id) })),
    parameters,
    assignments: sketch.assignments ?? [],
    reactions,
    observables: [...counted, ...(sketch.observables ?? [])],
  };
}

export const immigrationDeath = (immigration = 10, death = 0.1, initial = 0): ResolvedNetwork =>
  network({
    counts: { X: initial },
    reactions: [
      { id: 'immigration', produces: { X: 1 }, rate: immigration },
      { id: 'death', consumes: { X: 1 }, rate: death },
    ],
  });

export const birthDeath = (birth: number, death: number, initial: number): ResolvedNetwork =>
  network({
    counts: { X: initial },
    reactions: [
      { id: 'birth', consumes: { X: 1 }, produces: { X: 2 }, rate: birth },
      { id: 'death', consumes: { X: 1 }, rate: death },
    ],
  });

export const pureDeath = (death: number, initial: number): ResolvedNetwork =>
  network({ counts: { X: initial }, reactions: [{ id: 'death', consumes: { X: 1 }, rate: death }] });

export const isomerisation = (forward: number, backward: number, total: number): ResolvedNetwork =>
  network({
    counts: { A: total, B: 0 },
    reactions: [
      { id: 'forward', consumes: { A: 1 }, produces: { B: 1 }, rate: forward },
      { id: 'backward', consumes: { B: 1 }, produces: { A: 1 }, rate: backward },
    ],
  });

export const dimerisation = (association: number, dissociation: number, monomers: number): ResolvedNetwork =>
  network({
    counts: { P: monomers, P2: 0 },
    reactions: [
      { id: 'association', consumes: { P: 2 }, produces: { P2: 1 }, rate: association },
      { id: 'dissociation', consumes: { P2: 1 }, produces: { P: 2 }, rate: dissociation },
    ],
  });

export const twoStageExpression = (kR = 0.5, gammaR = 0.5, kP = 1, gammaP = 0.1): ResolvedNetwork =>
  network({
    counts: { mRNA: 0, protein: 0 },
    reactions: [
      { id: 'synthesis', produces: { mRNA: 1 }, rate: kR },
      { id: 'mRNA_decay', consumes: { mRNA: 1 }, rate: gammaR },
      { id: 'translation', consumes: { mRNA: 1 }, produces: { mRNA: 1, protein: 1 }, rate: kP },
      { id: 'protein_decay', consumes: { protein: 1 }, rate: gammaP },
    ],
  });

export const enzyme = (substrate: number, enzymes = 1, k1 = 0.02, kMinus1 = 0.3, k2 = 0.5): ResolvedNetwork =>
  network({
    counts: { S: substrate, E: enzymes, ES: 0, P: 0 },
    reactions: [
      { id: 'binding', consumes: { S: 1, E: 1 }, produces: { ES: 1 }, rate: k1 },
      { id: 'unbinding', consumes: { ES: 1 }, produces: { S: 1, E: 1 }, rate: kMinus1 },
      { id: 'conversion', consumes: { ES: 1 }, produces: { E: 1, P: 1 }, rate: k2 },
    ],
  });

/** Infection at rate beta · S · I / N, recovery at gamma · I. */
export const epidemic = (susceptible: number, infected: number, beta: number, gamma: number): ResolvedNetwork =>
  network({
    counts: { S: susceptible, I: infected, R: 0 },
    reactions: [
      { id: 'infection', consumes: { S: 1, I: 1 }, produces: { I: 2 }, rate: beta / (susceptible + infected) },
      { id: 'recovery', consumes: { I: 1 }, produces: { R: 1 }, rate: gamma },
    ],
  });

export const decayingDimerising = (): ResolvedNetwork =>
  network({
    counts: { S1: 4150, S2: 39565, S3: 3445 },
    reactions: [
      { consumes: { S1: 1 }, rate: 1 },
      { consumes: { S1: 2 }, produces: { S2: 1 }, rate: 0.002 },
      { consumes: { S2: 1 }, produces: { S1: 2 }, rate: 0.5 },
      { consumes: { S2: 1 }, produces: { S3: 1 }, rate: 0.04 },
    ],
  });
