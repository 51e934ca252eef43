/** Names the parts of SBML that a network cannot hold, with the reason and what to change. */
import type { SbmlReading } from './sbml-reading.ts';
import type { XmlElement } from './xml-tree.ts';

/** Lists of a model that the reader reads. */
const read = new Set([
  'listOfFunctionDefinitions',
  'listOfUnitDefinitions',
  'listOfCompartments',
  'listOfSpecies',
  'listOfParameters',
  'listOfInitialAssignments',
  'listOfRules',
  'listOfReactions',
  'listOfEvents',
  'notes',
  'annotation',
]);
/** They classify and say nothing about the dynamics. */
const harmless = new Set(['listOfCompartmentTypes', 'listOfSpeciesTypes']);

/** Refuses a package that the file says it cannot be understood without, and mentions the optional ones. */
export function refusePackages(reading: SbmlReading, root: XmlElement): void {
  for (const { name, namespace, value } of root.foreignAttributes) {
    if (name !== 'required') continue;
    const label = packageLabel(root, namespace);
    if (value.trim() === 'true' || value.trim() === '1') {
      reading.refuse(
        root,
        'required_package',
        `The package ${label} is marked required, so the model means something else without it, and it is not supported. Export the model without it.`,
      );
    } else {
      reading.warn(root, 'optional_package', `The package ${label} is optional and was left out.`);
    }
  }
}

function packageLabel(root: XmlElement, namespace: string): string {
  const prefix = Object.entries(root.declared).find(([, uri]) => uri === namespace)?.[0];
  return prefix === undefined || prefix === '' ? namespace.slice(0, 200) : `“${prefix}” (${namespace.slice(0, 200)})`;
}

/** Everything in the model that is not read. */
export function refuseUnsupported(reading: SbmlReading, model: XmlElement): void {
  if (model.attributes.has('conversionFactor')) {
    reading.refuse(
      model,
      'conversion_factor',
      'The model has a conversionFactor, which is not supported; express amounts and extents in the same unit.',
    );
  }
  for (const element of model.children) {
    if (element.namespace !== reading.namespace) continue;
    if (element.name === 'listOfRules') refuseRules(reading, element);
    else if (element.name === 'listOfConstraints')
      reading.warn(element, 'constraints_ignored', 'Constraints are not checked during a run.');
    else if (harmless.has(element.name))
      reading.inform(element, 'types_ignored', `<${element.name}> only classifies and was left out.`);
    else if (!read.has(element.name))
      reading.refuse(element, 'unexpected_element', `<${element.name}> has no place in <model>.`);
  }
}

function refuseRules(reading: SbmlReading, list: XmlElement): void {
  for (const rule of list.children) {
    if (rule.name === 'rateRule') {
      const variable = rule.attributes.get('variable') ?? 'its variable';
      reading.refuse(
        rule,
        'rate_rule',
        `A rateRule changes ${variable} continuously, and counts change by jumps. Write it as reactions that make and take ${variable}.`,
      );
    } else if (rule.name === 'algebraicRule') {
      reading.refuse(
        rule,
        'algebraic_rule',
        'An algebraicRule is an equation to be solved at every moment, which is not supported. Solve it by hand and write an assignmentRule.',
      );
    }
  }
}
