/** Checks of what names refer to: unknown names, compartments, rules and their order, what may stand in which expression. */
import type { Problem } from './document.ts';
import { symbolsOf } from './expression-leaves.ts';
import { checkNames, speciesBehind, suggestion } from './check-names.ts';
import { orderAssignmentRules } from './order-assignment-rules.ts';
import type { ParsedNetwork, ParsedReaction } from './parse-network.ts';
import { error } from './problems.ts';

/** Every fault in the references of a network whose rows have been checked. */
export function checkReferences(network: ParsedNetwork): Problem[] {
  const problems: Problem[] = [];
  const { document } = network;
  document.species.forEach((species, index) =>
    problems.push(...checkCompartment(network, species, `species[${index}].compartment`)),
  );
  network.rules.forEach((rule, index) => {
    problems.push(...checkRuleVariable(network, index));
    problems.push(...checkNames(network, rule, `assignmentRules[${index}].expression`));
  });
  problems.push(...checkRuleOrder(network));
  network.reactions.forEach((reaction, index) => {
    problems.push(...checkEquation(network, reaction, `reactions[${index}].equation`));
    problems.push(...checkNames(network, reaction.law, reaction.lawPath, reaction.localParameters));
    if (document.reactions[index]!.rateLaw.kind === 'massAction') problems.push(...checkConstant(network, reaction));
  });
  network.observables.forEach((observable, index) =>
    problems.push(...checkNames(network, observable, `observables[${index}].expression`)),
  );
  return problems;
}

function checkCompartment(
  { names }: ParsedNetwork,
  { id, compartment, meaning }: ParsedNetwork['document']['species'][number],
  path: string,
): Problem[] {
  if (compartment === undefined) {
    if (meaning !== 'concentration') return [];
    return [
      error(
        path,
        'missing_compartment',
        `${id} means a concentration in expressions, so it needs a compartment with a size.`,
      ),
    ];
  }
  if (names.get(compartment)?.kind === 'compartment') return [];
  const compartments = [...names].flatMap(([name, { kind }]) => (kind === 'compartment' ? [name] : []));
  return [
    error(
      path,
      'unknown_compartment',
      `There is no compartment “${compartment}”.${suggestion(compartment, compartments)}`,
    ),
  ];
}

function checkRuleVariable(network: ParsedNetwork, index: number): Problem[] {
  const { variable } = network.document.assignmentRules![index]!;
  const path = `assignmentRules[${index}].variable`;
  if (network.ruleOf.get(variable) !== index) {
    return [error(path, 'duplicate_rule', `${variable} already has a rule; a variable has one.`)];
  }
  const known = network.names.get(variable);
  if (known?.kind === 'parameter' || known?.kind === 'species') return [];
  if (known?.kind === 'compartment')
    return [error(path, 'variable_compartment', `${variable} is a compartment; sizes are constant.`)];
  const usable = [...network.names].flatMap(([name, { kind }]) =>
    kind === 'parameter' || kind === 'species' ? [name] : [],
  );
  return [
    error(path, 'unknown_name', `There is no parameter or species “${variable}”.${suggestion(variable, usable)}`),
  ];
}

function checkRuleOrder(network: ParsedNetwork): Problem[] {
  const ordered = orderAssignmentRules(ruleUses(network));
  if (ordered.ok) return [];
  const variables = ordered.cycle.map((index) => network.document.assignmentRules![index]!.variable);
  const circle = [...variables, variables[0]].join(' → ');
  return [
    error(
      `assignmentRules[${ordered.cycle[0]}].expression`,
      'cyclic_rules',
      `Rules go round in a circle: ${circle}. Break it by removing one of them.`,
    ),
  ];
}

/** For each rule, the rules whose variables it reads. */
export function ruleUses({ rules, ruleOf }: ParsedNetwork): number[][] {
  return rules.map((rule) => (rule === null ? [] : [...symbolsOf(rule)].flatMap((id) => ruleOf.get(id) ?? [])));
}

function checkEquation(network: ParsedNetwork, { equation }: ParsedReaction, path: string): Problem[] {
  if (equation === null) return [];
  const problems: Problem[] = [];
  if (equation.reversible) {
    problems.push(
      error(
        path,
        'reversible_equation',
        '⇌ stands for two reactions, each with a rate of its own: split it into forward and backward.',
      ),
    );
  }
  for (const id of new Set([...equation.reactants, ...equation.products].map(({ species }) => species))) {
    const known = network.names.get(id);
    if (known?.kind !== 'species') {
      const species = network.document.species.map((row) => row.id);
      const what = known === undefined ? `There is no species “${id}”.` : `“${id}” is a ${known.kind}, not a species.`;
      problems.push(error(path, 'unknown_species', `${what}${suggestion(id, species)}`));
    } else if (network.ruleOf.has(id)) {
      problems.push(
        error(
          path,
          'assigned_species_in_equation',
          `${id} is set by an assignment rule, so no reaction can take or make it. Remove the rule, or use ${id} in the law only.`,
        ),
      );
    }
  }
  return problems;
}

/** The constant of a mass-action law may use parameters and compartments, never species, not even through a rule. */
function checkConstant(network: ParsedNetwork, { law, lawPath, localParameters }: ParsedReaction): Problem[] {
  if (law === null) return [];
  const symbols = [...symbolsOf(law)].filter((id) => !localParameters.has(id));
  for (const id of symbols) {
    const species = speciesBehind(network, id);
    if (species === null) continue;
    const how = species === id ? `${id} is a species` : `${id} depends on the species ${species} through a rule`;
    return [
      error(
        lawPath,
        'species_in_constant',
        `${how}, and the constant of mass action holds none: the reactants come in by themselves. Choose an expression law if the rate depends on it otherwise.`,
      ),
    ];
  }
  return [];
}
