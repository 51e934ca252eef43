/** Checks of timed and triggered changes: what they set, when, and what their expressions may use. */
import { checkNames, speciesBehind, suggestion } from './check-names.ts';
import type { ChangeDocument, Problem } from './document.ts';
import type { Expression } from './expression.ts';
import { symbolsOf } from './expression-leaves.ts';
import type { ParsedChange, ParsedNetwork } from './parse-network.ts';
import { error } from './problems.ts';

/** Every fault of the changes that shows before their times are worked out. */
export function checkChanges(network: ParsedNetwork): Problem[] {
  const set = new Set(
    network.document.changes?.flatMap(({ assignments }) => assignments.map(({ variable }) => variable)),
  );
  return network.changes.flatMap((parsed, index) => {
    const change = network.document.changes![index]!;
    const path = `changes[${index}]`;
    return [
      ...checkMoment(network, parsed, change, `${path}.when`, set),
      ...checkAssignments(network, change, `${path}.assignments`),
      ...parsed.values.flatMap((value, row) => checkNames(network, value, `${path}.assignments[${row}].expression`)),
    ];
  });
}

function checkMoment(
  network: ParsedNetwork,
  { time, every, condition }: ParsedChange,
  { when }: ChangeDocument,
  path: string,
  set: ReadonlySet<string>,
): Problem[] {
  if (when.kind === 'condition') return checkNames(network, condition, `${path}.condition`);
  const problems = [
    ...checkNames(network, time, `${path}.time`),
    ...checkNames(network, every, `${path}.every`),
    ...checkConstant(network, time, `${path}.time`, set),
    ...checkConstant(network, every, `${path}.every`, set),
  ];
  const { times } = when;
  if (times !== undefined && !(Number.isInteger(times) && times >= 1)) {
    problems.push(error(`${path}.times`, 'invalid_repetition', 'How often is a whole number from 1 up.'));
  }
  if ((when.every === undefined) !== (times === undefined)) {
    const missing = when.every === undefined ? 'every' : 'times';
    problems.push(
      error(
        `${path}.${missing}`,
        'invalid_repetition',
        'A repeated change needs both: how far apart, and how often in all.',
      ),
    );
  }
  return problems;
}

/** The moment of a timed change is known before the run begins. */
function checkConstant(
  network: ParsedNetwork,
  expression: Expression | null,
  path: string,
  set: ReadonlySet<string>,
): Problem[] {
  if (expression === null) return [];
  for (const id of symbolsOf(expression)) {
    const behind = speciesBehind(network, id, set);
    if (behind === null) continue;
    return [
      error(
        path,
        'time_not_constant',
        `${behind} changes during the run, so it cannot say when something happens. Use a condition instead.`,
      ),
    ];
  }
  return [];
}

function checkAssignments(network: ParsedNetwork, { assignments }: ChangeDocument, path: string): Problem[] {
  const { names, ruleOf } = network;
  if (assignments.length === 0)
    return [error(path, 'empty_change', 'A change sets at least one species or parameter.')];
  const usable = [...names].flatMap(([name, { kind }]) => (kind === 'species' || kind === 'parameter' ? [name] : []));
  return assignments.flatMap(({ variable }, index) => {
    const place = `${path}[${index}].variable`;
    const kind = names.get(variable)?.kind;
    if (assignments.findIndex((other) => other.variable === variable) !== index) {
      return [error(place, 'set_twice', `${variable} is set twice by the same change.`)];
    }
    if (ruleOf.has(variable))
      return [
        error(place, 'assigned_by_rule', `${variable} is worked out by an assignment rule; a change cannot set it.`),
      ];
    if (kind === 'compartment')
      return [error(place, 'variable_compartment', `${variable} is a compartment; sizes are constant.`)];
    // The id of a species that means a concentration needs a size here as in any expression.
    if (kind === 'species') return checkNames(network, { kind: 'symbol', id: variable }, place);
    if (kind === 'parameter') return [];
    return [
      error(place, 'unknown_name', `There is no species or parameter “${variable}”.${suggestion(variable, usable)}`),
    ];
  });
}
