/** Writes timed and triggered changes as SBML events without delay. */
import type { ChangeDocument } from '@/domain/network/document.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { parsedLaw, writeMathml, writeTimeTrigger } from './write-mathml.ts';
import { element, freeId, list } from './xml-writing.ts';

/**
 * One event for each moment of a timed change and one for each triggered change. Priorities keep the order of the
 * document among those of one moment. `taken` are all ids of the model.
 */
export function writeChanges(changes: ChangeDocument[], taken: ReadonlySet<string>): string[] {
  const ids = new Set(taken);
  return changes.flatMap((change, index) => {
    const priority =
      changes.length === 1
        ? ''
        : element('priority', {}, [writeMathml({ kind: 'number', value: changes.length - index })]);
    return triggersOf(change).map((trigger, repetition) => {
      const id = repetition === 0 ? change.id : freeId(`${change.id}_${repetition + 1}`, ids);
      ids.add(id);
      return element('event', { id, name: change.name, useValuesFromTriggerTime: 'false' }, [
        trigger,
        priority,
        assignments(change),
      ]);
    });
  });
}

function triggersOf({ when }: ChangeDocument): string[] {
  const trigger = (math: string, before: boolean) =>
    element('trigger', { initialValue: String(before), persistent: 'true' }, [math]);
  if (when.kind === 'condition') {
    return [trigger(writeMathml(parsedLaw(when.condition), 'truth'), !(when.happensAtStart ?? false))];
  }
  const first = parsedLaw(when.time);
  return Array.from({ length: when.times ?? 1 }, (_, repetition) =>
    trigger(writeTimeTrigger(moment(first, when.every, repetition)), false),
  );
}

function moment(first: Expression, every: string | undefined, repetition: number): Expression {
  if (every === undefined || repetition === 0) return first;
  const passed: Expression = {
    kind: 'binary',
    operator: 'multiply',
    left: { kind: 'number', value: repetition },
    right: parsedLaw(every),
  };
  return { kind: 'binary', operator: 'add', left: first, right: passed };
}

function assignments({ assignments: rows }: ChangeDocument): string {
  return list(
    'listOfEventAssignments',
    rows.map(({ variable, expression }) =>
      element('eventAssignment', { variable }, [writeMathml(parsedLaw(expression))]),
    ),
  );
}
