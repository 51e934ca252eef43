/** What is worth knowing about a network that can run: warnings and information, each with the path of its cell. */
import { conservedTotals, type ConservedTotal } from './conserved-totals.ts';
import type { NetworkDocument, Problem } from './document.ts';
import { evaluateExpression } from './evaluate-expression.ts';
import { parameterValuesAt } from './parameter-values.ts';
import { hasReactants, lawValue } from './propensity.ts';
import { information, warning } from './problems.ts';
import { unreachableReactions } from './reachable-reactions.ts';
import type { ResolvedNetwork } from './resolved.ts';
import { suspectedGrowth } from './suspected-growth.ts';
import { unguardedLaws } from './unguarded-laws.ts';

/** Beyond this many reactions only the linear checks run: advice must not hold up the editor. */
const reactionsLookedInto = 2_000;

/** Advice on `document`, of which `network` is the resolved form without overrides. */
export function adviseOnNetwork(document: NetworkDocument, network: ResolvedNetwork): Problem[] {
  const advice = [...neverFiring(network), ...idleConstants(network), ...badStarts(network), ...shadowing(document)];
  if (network.reactions.length > reactionsLookedInto) {
    const message = `With more than ${reactionsLookedInto.toLocaleString('en')} reactions, conserved totals, growth and laws without reactants are not looked into.`;
    return [...advice, information('reactions', 'not_looked_into', message)];
  }
  const totals = conservedTotals(network);
  return [
    ...advice,
    ...guarded(network),
    ...growth(document, network, totals),
    ...conserved(document, network, totals),
  ];
}

const speciesRow = (document: NetworkDocument, network: ResolvedNetwork, species: number): number =>
  document.species.findIndex(({ id }) => id === network.species[species]!.id);

function neverFiring(network: ResolvedNetwork): Problem[] {
  return unreachableReactions(network).map((index) => {
    const { id, reactants } = network.reactions[index]!;
    const names = reactants.map(({ species }) => network.species[species]!.id).join(', ');
    return warning(
      `reactions[${index}].equation`,
      'never_fires',
      `${id} can never fire: ${names} start with too few and nothing makes more.`,
    );
  });
}

function idleConstants(network: ResolvedNetwork): Problem[] {
  // A change of a parameter may wake a constant, through rules too.
  if ((network.changes ?? []).some(({ sets }) => sets.some(({ target }) => target.kind === 'parameter'))) return [];
  const parameters = parameterValuesAt(
    network,
    network.species.map(({ initialCount }) => initialCount),
  );
  return network.reactions.flatMap(({ id, law }, index) => {
    if (law.kind !== 'massAction' || evaluateExpression(law.constant, { parameters }) !== 0) return [];
    return [
      warning(`reactions[${index}].rateLaw.constant`, 'zero_constant', `${id} never fires while its constant is 0.`),
    ];
  });
}

/** Laws that are negative or undefined in the initial state would stop the first replicate at once. */
function badStarts(network: ResolvedNetwork): Problem[] {
  const counts = network.species.map(({ initialCount }) => initialCount);
  const parameters = parameterValuesAt(network, counts);
  return network.reactions.flatMap((reaction, index) => {
    if (reaction.law.kind !== 'expression' || !hasReactants(reaction, counts)) return [];
    const value = lawValue(reaction, counts, parameters);
    if (Number.isFinite(value) && value >= 0) return [];
    const message = `In the initial state the law of ${reaction.id} comes to ${value}. A negative or undefined rate stops the run; mend the law or the initial counts.`;
    return [warning(`reactions[${index}].rateLaw.expression`, 'bad_rate_at_start', message)];
  });
}

function shadowing(document: NetworkDocument): Problem[] {
  const names = new Set(
    [...document.species, ...(document.parameters ?? []), ...(document.compartments ?? [])].map(({ id }) => id),
  );
  return document.reactions.flatMap(({ id: reaction, localParameters }, row) =>
    (localParameters ?? []).flatMap(({ id }, index) =>
      names.has(id)
        ? [
            information(
              `reactions[${row}].localParameters[${index}].id`,
              'shadows',
              `Inside ${reaction}, ${id} means the local parameter, not the ${id} of the network.`,
            ),
          ]
        : [],
    ),
  );
}

function guarded(network: ResolvedNetwork): Problem[] {
  return unguardedLaws(network).map(({ reaction, species, count, value }) => {
    const { id } = network.species[species]!;
    const message = `With ${count} ${id} the law still comes to ${Number(value.toPrecision(3))}. The reaction does not fire without its reactants, whatever the law says.`;
    return warning(`reactions[${reaction}].rateLaw.expression`, 'guarded_law', message);
  });
}

function growth(document: NetworkDocument, network: ResolvedNetwork, totals: ConservedTotal[] | null): Problem[] {
  const held = (totals ?? []).filter(({ terms }) => terms.every(({ weight }) => weight > 0n));
  const bounded = new Set(held.flatMap(({ terms }) => terms.map(({ species }) => species)));
  return suspectedGrowth(network, bounded).map((species) => {
    const { id } = network.species[species]!;
    const message = `${id} may grow without bound: at high counts more of it is made than lost, in proportion to itself. Long horizons could cost without end; check its loss.`;
    return warning(`species[${speciesRow(document, network, species)}].id`, 'growth_suspected', message);
  });
}

function conserved(document: NetworkDocument, network: ResolvedNetwork, totals: ConservedTotal[] | null): Problem[] {
  if (totals === null) {
    return [
      information(
        'reactions',
        'totals_not_found',
        'Conserved totals were not looked for: the network is too large and too tangled.',
      ),
    ];
  }
  return totals.map(({ terms, total }) => {
    const id = ({ species }: { species: number }) => network.species[species]!.id;
    const path = `species[${speciesRow(document, network, terms[0]!.species)}].id`;
    if (terms.length === 1)
      return information(path, 'constant_species', `${id(terms[0]!)} never changes: it stays ${total}.`);
    return information(path, 'conserved_total', `Conserved: ${weightedSum(terms, id)} = ${total}.`);
  });
}

function weightedSum(terms: ConservedTotal['terms'], id: (term: { species: number }) => string): string {
  return terms
    .map((term, index) => {
      const size = term.weight < 0n ? -term.weight : term.weight;
      const sign = term.weight < 0n ? '− ' : index === 0 ? '' : '+ ';
      return `${sign}${size === 1n ? '' : `${size} `}${id(term)}`;
    })
    .join(' ');
}
