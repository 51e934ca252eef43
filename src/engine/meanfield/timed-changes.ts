/** The timed changes of a network as the rate equations make them; sets of counts need not be whole here. */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { compileExpression } from './compile-expression.ts';
import type { TimedChange } from './mean-field.ts';

/** In the order in which they happen: by time, those of one moment in document order. */
export function timedChangesOf(network: ResolvedNetwork): TimedChange[] {
  const assignments = network.assignments.map(({ parameter, expression }) => ({
    parameter,
    value: compileExpression(expression),
  }));
  const changes = (network.changes ?? []).flatMap(({ when, sets }) => {
    if (when.kind !== 'times') return [];
    const compiled = sets.map(({ target, expression }) => ({ target, value: compileExpression(expression) }));
    const apply: TimedChange['apply'] = (state) => {
      for (const { parameter, value } of assignments) state.parameters[parameter] = value(state);
      const values = compiled.map(({ value }) => value(state));
      compiled.forEach(({ target }, i) => {
        (target.kind === 'species' ? state.counts : state.parameters)[target.index] = values[i]!;
      });
    };
    return when.times.map((time) => ({ time, apply }));
  });
  return changes.sort((a, b) => a.time - b.time);
}
