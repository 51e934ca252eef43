/** Checks of single rows: ids, counts, sizes, values, and how many rows there are. */
import { limits } from '../limits.ts';
import type { NetworkDocument, Problem } from './document.ts';
import { identifierFault } from './identifiers.ts';
import { error } from './problems.ts';

interface Row {
  id: string;
  name?: string | undefined;
}

/** One error per list that is too long to look at, and nothing else; an empty list when all sizes are fine. */
export function checkSizes(document: NetworkDocument): Problem[] {
  const sizes: [path: string, count: number, most: number, what: string][] = [
    ['reactions', document.reactions.length, limits.reactionsPerNetwork, 'reactions'],
    ['species', document.species.length, limits.speciesPerNetwork, 'species'],
    [
      'parameters',
      countParameters(document),
      limits.parametersPerNetwork,
      'parameters, local ones and compartments included',
    ],
    ['assignmentRules', document.assignmentRules?.length ?? 0, limits.parametersPerNetwork, 'assignment rules'],
    ['observables', document.observables?.length ?? 0, limits.speciesPerNetwork, 'observables'],
    ['changes', document.changes?.length ?? 0, limits.changesPerNetwork, 'changes'],
  ];
  return sizes
    .filter(([, count, most]) => count > most)
    .map(([path, count, most, what]) =>
      error(
        path,
        'too_many',
        `${count.toLocaleString('en')} ${what}: a network holds at most ${most.toLocaleString('en')}.`,
      ),
    );
}

function countParameters(document: NetworkDocument): number {
  const local = document.reactions.reduce((sum, reaction) => sum + (reaction.localParameters?.length ?? 0), 0);
  return (document.parameters?.length ?? 0) + (document.compartments?.length ?? 0) + local;
}

/** Ids (syntax, reserved, doubled across the whole network), names' length, counts, sizes, values. */
export function checkRows(document: NetworkDocument): Problem[] {
  if (document.species.length === 0 && document.reactions.length === 0) {
    return [error('species', 'empty_network', 'The network is empty. Begin with a species and its initial count.')];
  }
  const problems = [...checkIds(document)];
  if (document.species.length === 0)
    problems.push(error('species', 'no_species', 'A network needs at least one species.'));
  if (document.reactions.length === 0) {
    problems.push(
      error('reactions', 'no_reactions', 'A network needs at least one reaction; without one nothing ever happens.'),
    );
  }
  document.compartments?.forEach(({ size }, index) => {
    if (size !== null && !(Number.isFinite(size) && size > 0)) {
      problems.push(
        error(
          `compartments[${index}].size`,
          'invalid_size',
          'A size is a number above 0; leave it empty when nothing depends on it.',
        ),
      );
    }
  });
  document.species.forEach(({ initialCount }, index) => {
    const fault = countFault(initialCount);
    if (fault !== null) problems.push(error(`species[${index}].initialCount`, fault.code, fault.message));
  });
  const values = (rows: { value: number }[] | undefined, path: string) =>
    rows?.forEach(({ value }, index) => {
      if (!Number.isFinite(value))
        problems.push(
          error(`${path}[${index}].value`, 'invalid_value', 'A value is a finite number, such as 0.5 or 2e-3.'),
        );
    });
  values(document.parameters, 'parameters');
  document.reactions.forEach(({ localParameters }, index) =>
    values(localParameters, `reactions[${index}].localParameters`),
  );
  return problems;
}

/** What is wrong with a count of molecules; null when it is a whole number from 0 to 2^31 − 1. */
export function countFault(count: number): { code: string; message: string } | null {
  if (!Number.isFinite(count)) return { code: 'invalid_count', message: 'A count is a whole number from 0 up.' };
  if (count < 0) return { code: 'negative_count', message: `${count}: a count is never negative.` };
  if (!Number.isInteger(count)) {
    return {
      code: 'non_integer_count',
      message: `${count} is not a whole number of molecules. Round it to ${Math.round(count)}?`,
    };
  }
  if (count > limits.initialCount) {
    return {
      code: 'count_too_large',
      message: `${count} is above the largest count, 2,147,483,647. At such counts the mean field is the better tool.`,
    };
  }
  return null;
}

function checkIds(document: NetworkDocument): Problem[] {
  const problems: Problem[] = [];
  const bearers = new Map<string, string>();
  const check = (rows: Row[] | undefined, path: string, known: Map<string, string>) =>
    rows?.forEach(({ id, name }, index) => {
      const place = `${path}[${index}]`;
      const fault = identifierFault(id);
      if (fault !== null) problems.push(error(`${place}.id`, fault.code, fault.message));
      const other = known.get(id);
      if (other !== undefined && id !== '') {
        problems.push(
          error(`${place}.id`, 'duplicate_id', `“${id}” is taken by ${other}; every id of a network is different.`),
        );
      } else known.set(id, `${path}[${index}]`);
      if (name !== undefined && name.length > limits.nameCharacters) {
        problems.push(
          error(`${place}.name`, 'name_too_long', `A name has at most ${limits.nameCharacters} characters.`),
        );
      }
    });
  check(document.compartments, 'compartments', bearers);
  check(document.species, 'species', bearers);
  check(document.parameters, 'parameters', bearers);
  check(document.reactions, 'reactions', bearers);
  check(document.observables, 'observables', bearers);
  check(document.changes, 'changes', bearers);
  document.reactions.forEach(({ localParameters }, index) =>
    check(localParameters, `reactions[${index}].localParameters`, new Map()),
  );
  return problems;
}
