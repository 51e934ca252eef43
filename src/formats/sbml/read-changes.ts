/** Reads SBML's events without delay as timed and triggered changes. */
import type { ChangeDocument, ChangeMoment } from '@/domain/network/document.ts';
import { evaluateExpression } from '@/domain/network/evaluate-expression.ts';
import { symbolsOf } from '@/domain/network/expression-leaves.ts';
import { reservedWords } from '@/domain/network/identifiers.ts';
import type { ModelNames } from './model-names.ts';
import { readMathElement } from './read-mathml.ts';
import { named, type StartValues } from './read-quantities.ts';
import { textOf } from './read-reactions.ts';
import { mathmlNamespace } from './sbml-names.ts';
import type { SbmlReading } from './sbml-reading.ts';
import type { XmlElement } from './xml-tree.ts';

export interface ChangeSurroundings {
  reading: SbmlReading;
  names: ModelNames;
  start: StartValues;
  /** Whether a name stands for, or depends on, a count. */
  changes: (id: string) => boolean;
}

/**
 * The changes of a model, those of higher priority first. A trigger “time ≥ t” becomes a timed change; a trigger on the
 * state a condition. Delays, priorities that vary and triggers that mix time and state are refused by name.
 */
export function readChanges(around: ChangeSurroundings, model: XmlElement): ChangeDocument[] {
  const { reading } = around;
  const events = reading.list(model, 'listOfEvents', 'event');
  const changes = events
    .map((event) => ({ event, priority: priorityOf(reading, event) }))
    .sort((a, b) => (a.priority < b.priority ? 1 : a.priority > b.priority ? -1 : 0))
    .flatMap(({ event }) => ({ event, change: readChange(around, event) }));
  const settable = changes.map(({ change }) => new Set(change?.assignments.map(({ variable }) => variable)));
  changes.forEach(({ event, change }, index) => {
    const others = settable.filter((_, other) => other !== index);
    if (change !== null && events.length > 1) warnOfMoments(reading, event, change, others);
  });
  return changes.flatMap(({ change }) => change ?? []);
}

/** Events of one moment: where the standard and the order of the document may differ. */
function warnOfMoments(
  reading: SbmlReading,
  event: XmlElement,
  change: ChangeDocument,
  others: ReadonlySet<string>[],
): void {
  const reads = change.assignments.flatMap(({ expression }) => expression.match(/[A-Za-z_]\w*/g) ?? []);
  const shared = reads.find((id) => others.some((set) => set.has(id)));
  if (shared !== undefined && reading.boolean(event, 'useValuesFromTriggerTime', true)) {
    reading.warn(
      event,
      'values_at_one_moment',
      `Should ${change.id} happen at the same moment as another change of ${shared}, it uses the value after that change, in the order of the document.`,
    );
  }
  const trigger = reading.child(event, 'trigger');
  if (trigger !== undefined && !reading.boolean(trigger, 'persistent', true)) {
    reading.warn(
      event,
      'trigger_not_persistent',
      `Once its condition has become true, ${change.id} happens even if another change of the same moment makes the condition false again.`,
    );
  }
}

/** −∞ without one: such events come last, in the order of the file. */
function priorityOf(reading: SbmlReading, event: XmlElement): number {
  const priority = reading.child(event, 'priority');
  if (priority === undefined) return -Infinity;
  const expression = reading.math(priority);
  if (expression === null) return -Infinity;
  if (symbolsOf(expression).size === 0) return evaluateExpression(expression, {});
  reading.refuse(
    priority,
    'event_priority',
    'A priority that varies is not supported; write a constant number, or put the events into the order in which they should happen.',
  );
  return -Infinity;
}

function readChange(around: ChangeSurroundings, event: XmlElement): ChangeDocument | null {
  const { reading, names } = around;
  const written = event.attributes.get('id')?.trim() ?? '';
  const id =
    written === '' ? names.freeId('change') : reservedWords.has(written) ? names.freeId(`${written}_`) : written;
  if (reading.child(event, 'delay') !== undefined) {
    reading.refuse(
      event,
      'event_delay',
      `The event ${id} has a delay, so the state would depend on the past, which is not supported. Model the delay as a chain of intermediate species.`,
    );
    return null;
  }
  const trigger = reading.child(event, 'trigger');
  if (trigger === undefined) {
    reading.refuse(event, 'missing_trigger', `The event ${id} has no trigger.`);
    return null;
  }
  const when = momentOf(around, id, trigger);
  const assignments = reading
    .list(event, 'listOfEventAssignments', 'eventAssignment')
    .flatMap((element) => readSetting(around, element));
  if (assignments.length === 0) reading.refuse(event, 'empty_change', `The event ${id} sets nothing.`);
  return when === null ? null : { id, ...named(event), when, assignments };
}

function readSetting({ reading, names }: ChangeSurroundings, element: XmlElement): ChangeDocument['assignments'] {
  const written = reading.required(element, 'variable');
  const variable = names.idOf(written);
  const target = names.elements.get(variable);
  const expression = reading.math(element);
  if (target?.name === 'compartment') {
    reading.refuse(
      element,
      'variable_compartment',
      `${variable} is a compartment set by an event; only constant sizes are supported.`,
    );
  } else if (target?.name !== 'species' && target?.name !== 'parameter') {
    reading.refuse(element, 'unknown_name', `“${written}” is no species or parameter, so an event cannot set it.`);
  } else if (reading.boolean(target, 'constant', reading.version.level === 2 && target.name === 'parameter')) {
    reading.refuse(element, 'constant_set', `${variable} is constant, so an event cannot set it.`);
  }
  if (expression === null) return [];
  const own = names.inDocumentTerms(expression, element);
  return [{ variable, expression: textOf(reading, element, target?.name === 'species' ? names.inItems(own) : own) }];
}

function momentOf(around: ChangeSurroundings, id: string, trigger: XmlElement): ChangeMoment | null {
  const { reading, names } = around;
  // Level 2 has no such attribute and behaves as if it were true.
  const before = reading.boolean(trigger, 'initialValue', true);
  const limit = timeLimitOf(trigger);
  if (limit === null) {
    const condition = reading.math(trigger);
    if (condition === null) return null;
    const text = textOf(reading, trigger, names.inDocumentTerms(condition, trigger));
    return { kind: 'condition', condition: text, happensAtStart: !before };
  }
  const expression = reading.guarded(() => readMathElement(limit, reading.functions));
  if (expression === null) return null;
  const time = names.inDocumentTerms(expression, limit);
  if ([...symbolsOf(time)].some(around.changes)) {
    reading.refuse(
      trigger,
      'time_in_trigger',
      `The trigger of ${id} compares the time with something that changes, which is not supported; compare it with a constant.`,
    );
    return null;
  }
  const value = evaluateExpression(time, { symbol: around.start });
  if (value > 0) return { kind: 'time', time: textOf(reading, trigger, time) };
  if (before) {
    reading.warn(
      trigger,
      'never_happens',
      `${id} never happens: its time is not after 0 and its trigger counts as true before the start. It was left out.`,
    );
    return null;
  }
  return { kind: 'time', time: '0' };
}

/** What the time is compared with in a trigger “time ≥ …” or “… ≤ time”, strict or not: at jumps in time both are the same. */
function timeLimitOf(trigger: XmlElement): XmlElement | null {
  const math = trigger.children.find(({ name, namespace }) => name === 'math' && namespace === mathmlNamespace);
  const apply = math?.children[0];
  const [operator, left, right, more] = apply?.name === 'apply' ? apply.children : [];
  if (operator === undefined || left === undefined || right === undefined || more !== undefined) return null;
  if ((operator.name === 'geq' || operator.name === 'gt') && isTime(left)) return right;
  return (operator.name === 'leq' || operator.name === 'lt') && isTime(right) ? left : null;
}

const isTime = ({ name, attributes }: XmlElement): boolean =>
  name === 'csymbol' && /\/time\/?$/.test(attributes.get('definitionURL')?.trim() ?? '');
