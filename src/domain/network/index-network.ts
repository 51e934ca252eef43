/** Puts indices in place of names in a network that has passed its checks. */
import type { Overrides } from './document.ts';
import type { Expression } from './expression.ts';
import { mapLeaves } from './expression-leaves.ts';
import type { ParsedNetwork, ParsedReaction } from './parse-network.ts';
import type { ResolvedNetwork, ResolvedReaction, Stoichiometry } from './resolved.ts';

/**
 * `ruleOrder` lists the assignment rules in dependency order. A species set by a rule becomes a parameter (the last
 * ones), since its value need not be whole; it stays among the observables, as a count.
 */
export function indexNetwork(parsed: ParsedNetwork, overrides: Overrides, ruleOrder: number[]): ResolvedNetwork {
  const { document } = parsed;
  const stateSpecies = document.species.filter(({ id }) => !parsed.ruleOf.has(id));
  const counts = new Map(Object.entries(overrides.initialCounts ?? {}));
  const { parameters, indexOf } = indexParameters(parsed, overrides);
  const speciesIndex = new Map(stateSpecies.map(({ id }, index) => [id, index]));
  const leaf = leafResolver(parsed, speciesIndex, indexOf);

  return {
    species: stateSpecies.map(({ id, initialCount, boundary }) => ({
      id,
      initialCount: counts.get(id) ?? initialCount,
      boundary: boundary ?? false,
    })),
    parameters,
    assignments: ruleOrder.map((rule) => ({
      parameter: indexOf.get(document.assignmentRules![rule]!.variable)!,
      expression: resolve(parsed.rules[rule]!, (id) => leaf(id)),
    })),
    reactions: parsed.reactions.map((reaction, index): ResolvedReaction => {
      const { id, rateLaw } = document.reactions[index]!;
      const law = resolve(reaction.law!, (name) =>
        reaction.localParameters.has(name) ? { kind: 'parameter', index: indexOf.get(`${id}.${name}`)! } : leaf(name),
      );
      return {
        id,
        ...stoichiometryOf(reaction, parsed, speciesIndex),
        law:
          rateLaw.kind === 'massAction'
            ? { kind: 'massAction', constant: law }
            : { kind: 'expression', expression: law },
      };
    }),
    observables: [
      ...document.species.map(({ id }) => ({ id, expression: countOf(id, parsed, speciesIndex, indexOf) })),
      ...(document.observables ?? []).map(({ id }, index) => ({
        id,
        expression: resolve(parsed.observables[index]!, (name) => leaf(name)),
      })),
    ],
  };
}

/** Resolves expressions outside reactions against a network that `indexNetwork` made of `parsed`. */
export function expressionResolver(
  parsed: ParsedNetwork,
  network: ResolvedNetwork,
): (expression: Expression) => Expression {
  const indices = (rows: { id: string }[]): Index => new Map(rows.map(({ id }, index) => [id, index]));
  const leaf = leafResolver(parsed, indices(network.species), indices(network.parameters));
  return (expression) => resolve(expression, leaf);
}

const resolve = (expression: Expression, leaf: (id: string) => Expression): Expression =>
  mapLeaves(expression, (node) => (node.kind === 'symbol' ? leaf(node.id) : node));

function indexParameters({ document, ruleOf }: ParsedNetwork, overrides: Overrides) {
  const values = new Map(Object.entries(overrides.parameters ?? {}));
  const rows = [
    ...(document.parameters ?? []).map(({ id, value }) => ({ id, value })),
    ...(document.compartments ?? []).flatMap(({ id, size }) =>
      size === null && !values.has(id) ? [] : [{ id, value: size ?? 1 }],
    ),
    ...document.reactions.flatMap(({ id, localParameters }) =>
      (localParameters ?? []).map((local) => ({ id: `${id}.${local.id}`, value: local.value })),
    ),
    ...document.species.flatMap(({ id, initialCount }) => (ruleOf.has(id) ? [{ id, value: initialCount }] : [])),
  ];
  const parameters = rows.map(({ id, value }) => ({ id, value: values.get(id) ?? value }));
  return { parameters, indexOf: new Map(parameters.map(({ id }, index) => [id, index])) };
}

type Index = ReadonlyMap<string, number>;

/** What a name means in an expression outside local parameters. */
function leafResolver(parsed: ParsedNetwork, speciesIndex: Index, parameterIndex: Index): (id: string) => Expression {
  return (id) => {
    const index = speciesIndex.get(id);
    if (index === undefined) return { kind: 'parameter', index: parameterIndex.get(id)! };
    const { meaning, compartment } = parsed.document.species[parsed.names.get(id)!.index]!;
    const count: Expression = { kind: 'species', index };
    if (meaning !== 'concentration') return count;
    return {
      kind: 'binary',
      operator: 'divide',
      left: count,
      right: { kind: 'parameter', index: parameterIndex.get(compartment!)! },
    };
  };
}

/** A species as an observable: its count. A rule for a species that means a concentration gives count / size. */
function countOf(id: string, parsed: ParsedNetwork, speciesIndex: Index, parameterIndex: Index): Expression {
  const index = speciesIndex.get(id);
  if (index !== undefined) return { kind: 'species', index };
  const { meaning, compartment } = parsed.document.species[parsed.names.get(id)!.index]!;
  const value: Expression = { kind: 'parameter', index: parameterIndex.get(id)! };
  const size = parameterIndex.get(compartment ?? '');
  if (meaning !== 'concentration' || size === undefined) return value;
  return { kind: 'binary', operator: 'multiply', left: value, right: { kind: 'parameter', index: size } };
}

function stoichiometryOf({ equation }: ParsedReaction, parsed: ParsedNetwork, speciesIndex: Index) {
  const net = new Map<number, number>();
  const add = (id: string, count: number) => {
    const index = speciesIndex.get(id)!;
    const { boundary } = parsed.document.species[parsed.names.get(id)!.index]!;
    if (!boundary) net.set(index, (net.get(index) ?? 0) + count);
  };
  equation!.reactants.forEach(({ species, count }) => add(species, -count));
  equation!.products.forEach(({ species, count }) => add(species, count));
  const reactants: Stoichiometry[] = equation!.reactants.map(({ species, count }) => ({
    species: speciesIndex.get(species)!,
    count,
  }));
  const changes: Stoichiometry[] = [...net].flatMap(([species, count]) => (count === 0 ? [] : [{ species, count }]));
  return { reactants, changes };
}
