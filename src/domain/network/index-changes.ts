/** Puts indices in place of names in changes that have passed their checks, and works out when timed ones happen. */
import { limits } from '../limits.ts';
import type { ChangeDocument, Overrides, Problem } from './document.ts';
import { evaluateExpression } from './evaluate-expression.ts';
import type { Expression } from './expression.ts';
import { expressionResolver } from './index-network.ts';
import { parameterValuesAt } from './parameter-values.ts';
import type { ParsedChange, ParsedNetwork } from './parse-network.ts';
import { error } from './problems.ts';
import type { ResolvedChange, ResolvedNetwork } from './resolved.ts';

/** The changes of `parsed` in the indices of `network`, or the times that cannot be. */
export function indexChanges(
  parsed: ParsedNetwork,
  network: ResolvedNetwork,
  changeTimes: Overrides['changeTimes'] = {},
): { changes: ResolvedChange[]; problems: Problem[] } {
  const problems: Problem[] = [];
  const resolve = expressionResolver(parsed, network);
  const parameters = parameterValuesAt(
    network,
    network.species.map(({ initialCount }) => initialCount),
  );
  const valueOf = (expression: Expression): number => evaluateExpression(resolve(expression), { parameters });
  let room: number = limits.changeTimes;
  const changes = parsed.changes.map((change, index): ResolvedChange => {
    const document = parsed.document.changes![index]!;
    const sets = document.assignments.map(({ variable }, row) =>
      setting(parsed, network, variable, resolve(change.values[row]!)),
    );
    if (document.when.kind === 'condition') {
      const before = !(document.when.happensAtStart ?? false);
      return { id: document.id, when: { kind: 'condition', condition: resolve(change.condition!), before }, sets };
    }
    const first = changeTimes[document.id] ?? valueOf(change.time!);
    const outcome = timesOf(change, first, document, valueOf, room, `changes[${index}].when`);
    if (Array.isArray(outcome)) room -= outcome.length;
    else problems.push(outcome);
    return { id: document.id, when: { kind: 'times', times: Array.isArray(outcome) ? outcome : [] }, sets };
  });
  return { changes, problems };
}

function timesOf(
  { every }: ParsedChange,
  first: number,
  { when }: ChangeDocument,
  valueOf: (expression: Expression) => number,
  room: number,
  path: string,
): number[] | Problem {
  if (!(first >= 0 && first < Infinity)) {
    return error(`${path}.time`, 'invalid_time', `The time comes to ${first}; it must be a number from 0 up.`);
  }
  const count = (when.kind === 'time' ? when.times : undefined) ?? 1;
  if (count > room) {
    return error(
      `${path}.times`,
      'too_many',
      `Timed changes happen at most ${limits.changeTimes.toLocaleString('en')} times in all.`,
    );
  }
  const apart = every === null ? 0 : valueOf(every);
  if (every !== null && !(apart > 0 && apart < Infinity)) {
    return error(`${path}.every`, 'invalid_time', `The interval comes to ${apart}; it must be above 0.`);
  }
  return Array.from({ length: count }, (_, repetition) => first + repetition * apart);
}

/** A species that means a concentration is set to concentration · size items. */
function setting(
  parsed: ParsedNetwork,
  network: ResolvedNetwork,
  variable: string,
  expression: Expression,
): ResolvedChange['sets'][number] {
  const species = network.species.findIndex(({ id }) => id === variable);
  const parameterIndex = (id: string): number => network.parameters.findIndex((parameter) => parameter.id === id);
  if (species < 0) return { target: { kind: 'parameter', index: parameterIndex(variable) }, expression };
  const target = { kind: 'species' as const, index: species };
  const { meaning, compartment } = parsed.document.species[parsed.names.get(variable)!.index]!;
  if (meaning !== 'concentration') return { target, expression };
  const size: Expression = { kind: 'parameter', index: parameterIndex(compartment!) };
  return { target, expression: { kind: 'binary', operator: 'multiply', left: expression, right: size } };
}
