/** What the editor holds while somebody types: every cell as text, so that nothing typed is ever lost or rewritten. */
import type { ChangeDocument, NetworkDocument, ParameterDocument } from '@/domain/network/document.ts';

export const gridNames = [
  'species',
  'parameters',
  'reactions',
  'compartments',
  'assignmentRules',
  'localParameters',
  'observables',
  'changes',
] as const;
export type GridName = (typeof gridNames)[number];

export interface Row {
  /** Stays with the row for its life, so that focus and problems follow it when rows move. */
  key: string;
  /** By column id; an absent cell is empty. Tick boxes hold `ticked` or nothing. */
  cells: Record<string, string>;
}

export interface Draft {
  name: string;
  timeUnit: string;
  grids: Record<GridName, Row[]>;
  /** The number in the next row's key. */
  nextKey: number;
}

export const ticked = 'yes';
export const whenWords = { time: 'at a time', condition: 'when true' } as const;
export const lawWords = { massAction: 'mass action', expression: 'expression' } as const;

/** What a new row begins with; the rest is empty. */
export const newRowCells: Record<GridName, Record<string, string>> = {
  species: { initialCount: '0' },
  parameters: {},
  reactions: { law: lawWords.massAction },
  compartments: {},
  assignmentRules: {},
  localParameters: {},
  observables: {},
  changes: { when: whenWords.time },
};

export const emptyDraft = (): Draft => ({
  name: '',
  timeUnit: 's',
  grids: {
    species: [],
    parameters: [],
    reactions: [],
    compartments: [],
    assignmentRules: [],
    localParameters: [],
    observables: [],
    changes: [],
  },
  nextKey: 0,
});

const numberCell = (value: number | null): string => (value === null || Number.isNaN(value) ? '' : String(value));
const parameterCells = ({ id, name, value, unit }: ParameterDocument) => ({
  id,
  name: name ?? '',
  value: numberCell(value),
  unit: unit ?? '',
});

const changeCells = ({ id, name, when, assignments }: ChangeDocument): Record<string, string> => ({
  id,
  name: name ?? '',
  when: whenWords[when.kind],
  at: when.kind === 'time' ? when.time : when.condition,
  every: when.kind === 'time' ? (when.every ?? '') : '',
  times: when.kind === 'time' ? numberCell(when.times ?? null) : '',
  start: when.kind === 'condition' && when.happensAtStart ? ticked : '',
  sets: assignments.map(({ variable, expression }) => `${variable} = ${expression}`).join('; '),
});

/** The cells of a stored document, row for row. */
export function draftOf(name: string, document: NetworkDocument): Draft {
  let nextKey = 0;
  const rows = (cells: Record<string, string>[]): Row[] => cells.map((row) => ({ key: `r${nextKey++}`, cells: row }));
  const grids: Draft['grids'] = {
    species: rows(
      document.species.map((species) => ({
        id: species.id,
        name: species.name ?? '',
        initialCount: numberCell(species.initialCount),
        boundary: species.boundary ? ticked : '',
        compartment: species.compartment ?? '',
        concentration: species.meaning === 'concentration' ? ticked : '',
      })),
    ),
    parameters: rows((document.parameters ?? []).map(parameterCells)),
    reactions: rows(
      document.reactions.map(({ id, name, equation, rateLaw }) => ({
        id,
        name: name ?? '',
        equation,
        law: lawWords[rateLaw.kind],
        rate: rateLaw.kind === 'massAction' ? rateLaw.constant : rateLaw.expression,
      })),
    ),
    compartments: rows(
      (document.compartments ?? []).map(({ id, name, size, unit }) => ({
        id,
        name: name ?? '',
        size: numberCell(size),
        unit: unit ?? '',
      })),
    ),
    assignmentRules: rows(
      (document.assignmentRules ?? []).map(({ variable, expression }) => ({ variable, expression })),
    ),
    localParameters: rows(
      document.reactions.flatMap(({ id, localParameters }) =>
        (localParameters ?? []).map((parameter) => ({ reaction: id, ...parameterCells(parameter) })),
      ),
    ),
    observables: rows(
      (document.observables ?? []).map(({ id, name: title, expression }) => ({ id, name: title ?? '', expression })),
    ),
    changes: rows((document.changes ?? []).map(changeCells)),
  };
  return { name, timeUnit: document.timeUnit ?? '', grids, nextKey };
}

/** Whether two drafts say the same, whatever their row keys. Rows that nobody touched are the same objects: quick. */
export function sameContent(one: Draft, other: Draft): boolean {
  return (
    one.name === other.name &&
    one.timeUnit === other.timeUnit &&
    gridNames.every((grid) => sameRows(one.grids[grid], other.grids[grid]))
  );
}

const sameRows = (some: Row[], others: Row[]): boolean =>
  some === others ||
  (some.length === others.length &&
    some.every((row, index) => row === others[index] || sameCells(row, others[index]!)));

const sameCells = ({ cells: some }: Row, { cells: others }: Row): boolean =>
  [...new Set([...Object.keys(some), ...Object.keys(others)])].every(
    (column) => (some[column] ?? '') === (others[column] ?? ''),
  );
