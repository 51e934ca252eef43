/** The readable difference between two networks: which rows came, went or changed, and in which field. */
import type { ChangeMoment, NetworkDocument } from './document.ts';
import { normaliseDocument } from './normalise-document.ts';

export type RowKind =
  | 'network'
  | 'compartment'
  | 'species'
  | 'parameter'
  | 'assignment rule'
  | 'reaction'
  | 'local parameter'
  | 'observable'
  | 'change';

export interface FieldChange {
  /** In words: “initial count”, “equation”, “rate law”. */
  field: string;
  /** As shown to people; null where there was or is nothing. */
  from: string | null;
  to: string | null;
}

export interface RowDifference {
  kind: RowKind;
  /** The row's id; `reaction.parameter` for a local parameter, '' for the network itself. */
  id: string;
  change: 'added' | 'removed' | 'changed';
  /** Every field that says something, for rows added or removed; the changed ones otherwise. */
  fields: FieldChange[];
}

/** In the order of the table; null where a field says nothing. */
type Fields = Map<string, string | null>;
interface Row {
  kind: RowKind;
  id: string;
  fields: Fields;
}

/**
 * What turns `from` into `to`, in the order of the tables, rows matched by id. Spelling that means nothing (spaces, the
 * form of an arrow) is no difference, nor is the order of rows. Linear in the number of rows.
 */
export function differenceOfNetworks(from: NetworkDocument, to: NetworkDocument): RowDifference[] {
  const before = new Map(rowsOf(from).map((row) => [keyOf(row), row]));
  const after = new Map(rowsOf(to).map((row) => [keyOf(row), row]));
  const nothing: Fields = new Map();
  const removed = [...before.values()]
    .filter((row) => !after.has(keyOf(row)))
    .map(({ kind, id, fields }): RowDifference => ({ kind, id, change: 'removed', fields: changes(fields, nothing) }));
  const other = [...after.values()].flatMap((row): RowDifference[] => {
    const old = before.get(keyOf(row));
    const fields = changes(old?.fields ?? nothing, row.fields);
    if (old !== undefined && fields.length === 0) return [];
    return [{ kind: row.kind, id: row.id, change: old === undefined ? 'added' : 'changed', fields }];
  });
  return [...removed, ...other].sort((a, b) => kinds.indexOf(a.kind) - kinds.indexOf(b.kind));
}

const kinds: RowKind[] = [
  'network',
  'compartment',
  'species',
  'parameter',
  'assignment rule',
  'reaction',
  'local parameter',
  'observable',
  'change',
];
const keyOf = ({ kind, id }: Row): string => `${kind} ${id}`;

function changes(from: Fields, to: Fields): FieldChange[] {
  return [...new Set([...from.keys(), ...to.keys()])]
    .map((field) => ({ field, from: from.get(field) ?? null, to: to.get(field) ?? null }))
    .filter((change) => change.from !== change.to);
}

function rowsOf(document: NetworkDocument): Row[] {
  const network = normaliseDocument(document);
  const rows: Row[] = [{ kind: 'network', id: '', fields: fields({ 'time unit': network.timeUnit }) }];
  const add = (kind: RowKind, id: string, values: Record<string, string | number | boolean | null | undefined>) =>
    rows.push({ kind, id, fields: fields(values) });
  for (const { id, name, size, unit } of network.compartments ?? []) add('compartment', id, { name, size, unit });
  for (const { id, name, compartment, initialCount, boundary, meaning } of network.species) {
    add('species', id, {
      name,
      compartment,
      'initial count': initialCount,
      boundary: boundary ? 'yes' : undefined,
      meaning: meaning === 'concentration' ? meaning : undefined,
    });
  }
  for (const { id, name, value, unit } of network.parameters ?? []) add('parameter', id, { name, value, unit });
  for (const { variable, expression } of network.assignmentRules ?? [])
    add('assignment rule', variable, { expression });
  for (const { id, name, equation, rateLaw, localParameters } of network.reactions) {
    const law = rateLaw.kind === 'massAction' ? `mass action, constant ${rateLaw.constant}` : rateLaw.expression;
    add('reaction', id, { name, equation, 'rate law': law });
    for (const local of localParameters ?? [])
      add('local parameter', `${id}.${local.id}`, { name: local.name, value: local.value, unit: local.unit });
  }
  for (const { id, name, expression } of network.observables ?? []) add('observable', id, { name, expression });
  for (const { id, name, when, assignments } of network.changes ?? []) {
    const sets = assignments.map(({ variable, expression }) => `${variable} = ${expression}`).join('; ');
    add('change', id, { name, when: wordsForMoment(when), sets });
  }
  return rows;
}

function wordsForMoment(when: ChangeMoment): string {
  if (when.kind === 'condition') return `when ${when.condition}${when.happensAtStart ? ', at the start too' : ''}`;
  return `at ${when.time}${when.every === undefined ? '' : `, every ${when.every}, ${when.times ?? 1} times`}`;
}

function fields(values: Record<string, string | number | boolean | null | undefined>): Fields {
  return new Map(
    Object.entries(values).map(([field, value]) => [
      field,
      value === undefined || value === null ? null : String(value),
    ]),
  );
}
