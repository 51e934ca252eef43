/** Turns the editor's cells into a network document, and the path of a problem back into the cell that it means. */
import type { ChangeDocument, NetworkDocument, ParameterDocument, Problem } from '@/domain/network/document.ts';
import { lawWords, ticked, whenWords, type Draft, type GridName, type Row } from './draft.ts';

/** A place in the editor. */
export interface CellPlace {
  grid: GridName;
  key: string;
  column: string;
}

export interface WrittenDocument {
  document: NetworkDocument;
  /** Row keys in the order of the document's lists; blank rows are in neither. */
  keys: Record<Exclude<GridName, 'localParameters'>, string[]>;
  /** Row keys of the local parameters of each reaction, by reaction index. */
  localKeys: string[][];
  /** What the cells say that no document can hold. */
  problems: Problem[];
  /** Rows of local parameters whose reaction does not exist. */
  strayLocalKeys: string[];
}

const isBlank = ({ cells }: Row): boolean => Object.values(cells).every((text) => text.trim() === '');
const cell = (row: Row, column: string): string => (row.cells[column] ?? '').trim();
const optional = (row: Row, column: string): string | undefined => cell(row, column) || undefined;

/** The number that a cell states, thousands separators of spreadsheets allowed; NaN where it states none. */
export function numberOf(text: string): number {
  const compact = text
    .trim()
    .replaceAll(/[\s\u00a0\u2009_]/g, '')
    .replace(/^−/, '-');
  if (/^[+-]?\d{1,3}(,\d{3})+(\.\d+)?$/.test(compact)) return Number(compact.replaceAll(',', ''));
  return /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(compact) ? Number(compact) : NaN;
}

const parameterOf = (row: Row): ParameterDocument => ({
  id: cell(row, 'id'),
  name: optional(row, 'name'),
  value: numberOf(cell(row, 'value')),
  unit: optional(row, 'unit'),
});

/** New rows come with cells filled in; a row that holds nothing else is blank too. */
const isUntouched = (grid: GridName, row: Row): boolean =>
  isBlank(row) ||
  (grid === 'species' &&
    Object.entries(row.cells).every(
      ([column, text]) => text.trim() === '' || (column === 'initialCount' && text === '0'),
    )) ||
  (grid === 'reactions' &&
    Object.entries(row.cells).every(([column, text]) => text.trim() === '' || column === 'law')) ||
  (grid === 'changes' && Object.entries(row.cells).every(([column, text]) => text.trim() === '' || column === 'when'));

/** The document that the cells write down. Numbers that cannot be read become NaN, which the checks name. */
export function writtenDocument(draft: Draft): WrittenDocument {
  const filled = (grid: GridName): Row[] => draft.grids[grid].filter((row) => !isUntouched(grid, row));
  const rows = {
    species: filled('species'),
    parameters: filled('parameters'),
    reactions: filled('reactions'),
    compartments: filled('compartments'),
    assignmentRules: filled('assignmentRules'),
    observables: filled('observables'),
    changes: filled('changes'),
  };
  const locals = filled('localParameters');
  const localsOf = (reaction: Row): Row[] =>
    locals.filter((row) => cell(row, 'reaction') === cell(reaction, 'id') && cell(row, 'reaction') !== '');
  const localRows = rows.reactions.map(localsOf);
  const owned = new Set(localRows.flat());
  const strays = locals.filter((row) => !owned.has(row));

  const document: NetworkDocument = {
    timeUnit: draft.timeUnit.trim() || undefined,
    compartments: rows.compartments.map((row) => ({
      id: cell(row, 'id'),
      name: optional(row, 'name'),
      size: cell(row, 'size') === '' ? null : numberOf(cell(row, 'size')),
      unit: optional(row, 'unit'),
    })),
    species: rows.species.map((row) => ({
      id: cell(row, 'id'),
      name: optional(row, 'name'),
      compartment: optional(row, 'compartment'),
      initialCount: numberOf(cell(row, 'initialCount')),
      boundary: cell(row, 'boundary') === ticked,
      meaning: cell(row, 'concentration') === ticked ? 'concentration' : 'count',
    })),
    parameters: rows.parameters.map(parameterOf),
    assignmentRules: rows.assignmentRules.map((row) => ({
      variable: cell(row, 'variable'),
      expression: cell(row, 'expression'),
    })),
    reactions: rows.reactions.map((row, index) => ({
      id: cell(row, 'id'),
      name: optional(row, 'name'),
      equation: cell(row, 'equation'),
      rateLaw:
        cell(row, 'law') === lawWords.expression
          ? { kind: 'expression', expression: cell(row, 'rate') }
          : { kind: 'massAction', constant: cell(row, 'rate') },
      localParameters: localRows[index]!.map(parameterOf),
    })),
    observables: rows.observables.map((row) => ({
      id: cell(row, 'id'),
      name: optional(row, 'name'),
      expression: cell(row, 'expression'),
    })),
    ...(rows.changes.length > 0 ? { changes: rows.changes.map(changeOf) } : {}),
  };
  const keysOf = (list: Row[]): string[] => list.map(({ key }) => key);
  return {
    document,
    keys: {
      species: keysOf(rows.species),
      parameters: keysOf(rows.parameters),
      reactions: keysOf(rows.reactions),
      compartments: keysOf(rows.compartments),
      assignmentRules: keysOf(rows.assignmentRules),
      observables: keysOf(rows.observables),
      changes: keysOf(rows.changes),
    },
    localKeys: localRows.map(keysOf),
    strayLocalKeys: keysOf(strays),
    problems: [
      ...strays.map((row, index): Problem => ({
        severity: 'error',
        path: `strayLocalParameters[${index}].reaction`,
        code: 'unknown_reaction',
        message: `There is no reaction “${cell(row, 'reaction')}” for the local parameter ${cell(row, 'id')}.`,
      })),
      ...rows.changes.flatMap(unreadableSets),
    ],
  };
}

/** "X = X + 1; k = 0" as settings; a part without an equals sign becomes null. */
const setsOf = (row: Row): ({ variable: string; expression: string } | null)[] =>
  cell(row, 'sets')
    .split(';')
    .filter((part) => part.trim() !== '')
    .map((part) => {
      const match = /^\s*([^=<>!\s]+)\s*=(?!=)(.*)$/s.exec(part);
      return match ? { variable: match[1]!, expression: match[2]!.trim() } : null;
    });

function changeOf(row: Row): ChangeDocument {
  const every = optional(row, 'every');
  const times = optional(row, 'times');
  const when: ChangeDocument['when'] =
    cell(row, 'when') === whenWords.condition
      ? {
          kind: 'condition',
          condition: cell(row, 'at'),
          ...(cell(row, 'start') === ticked ? { happensAtStart: true } : {}),
        }
      : {
          kind: 'time',
          time: cell(row, 'at'),
          ...(every === undefined ? {} : { every }),
          ...(times === undefined ? {} : { times: numberOf(times) }),
        };
  const name = optional(row, 'name');
  return {
    id: cell(row, 'id'),
    ...(name === undefined ? {} : { name }),
    when,
    assignments: setsOf(row).filter((set) => set !== null),
  };
}

const unreadableSets = (row: Row, index: number): Problem[] => {
  const sets = setsOf(row);
  if (sets.length > 0 && !sets.includes(null)) return [];
  return [
    {
      severity: 'error',
      path: `changes[${index}].assignments`,
      code: 'unreadable_setting',
      message: 'Write what is set as “X = X + 10”, several with semicolons between them.',
    },
  ];
};

const pathPattern = /^(\w+)\[(\d+)\](?:\.(\w+)(?:\[(\d+)\])?(?:\.(\w+))?)?/;

/** The cell that a problem's path means; null for problems of the network as a whole. */
export function cellOfPath(path: string, written: WrittenDocument): CellPlace | null {
  const match = pathPattern.exec(path);
  if (match === null) return null;
  const [, list, index, field, inner, innerField] = match;
  if (list === 'strayLocalParameters') {
    const key = written.strayLocalKeys[Number(index)];
    return key === undefined ? null : { grid: 'localParameters', key, column: 'reaction' };
  }
  if (field === 'localParameters' && inner !== undefined) {
    const key = written.localKeys[Number(index)]?.[Number(inner)];
    return key === undefined ? null : { grid: 'localParameters', key, column: innerField ?? 'id' };
  }
  if (list === undefined || !(list in written.keys)) return null;
  const grid = list as keyof WrittenDocument['keys'];
  const key = written.keys[grid][Number(index)];
  if (key === undefined) return null;
  if (grid === 'changes') {
    const ofMoment: Record<string, string> = { every: 'every', times: 'times' };
    const column = field === 'when' ? (ofMoment[innerField ?? ''] ?? 'at') : field === 'assignments' ? 'sets' : 'id';
    return { grid, key, column };
  }
  const columns: Record<string, string> = { rateLaw: 'rate', meaning: 'concentration' };
  const fallback = grid === 'assignmentRules' ? 'variable' : 'id';
  return { grid, key, column: field === undefined ? fallback : (columns[field] ?? field) };
}
