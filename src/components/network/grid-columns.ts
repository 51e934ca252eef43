/** The columns of the editor's grids, as data. */
import { lawWords, whenWords, type GridName } from './draft.ts';

export interface GridColumn {
  id: string;
  title: string;
  kind: 'text' | 'number' | 'equation' | 'expression' | 'tick' | 'choice';
  /** Tailwind width of the column. */
  width: string;
  /** Shown in an empty cell of the row at the foot. */
  example?: string;
  choices?: readonly string[];
}

export interface GridDescription {
  title: string;
  /** One of its rows, in words: "species 3". */
  row: string;
  columns: GridColumn[];
  /** Said under the title while the grid is empty. */
  purpose: string;
}

const id = (example: string): GridColumn => ({ id: 'id', title: 'Id', kind: 'text', width: 'w-36', example });
const name: GridColumn = { id: 'name', title: 'Name', kind: 'text', width: 'w-48' };
const unit = (example: string): GridColumn => ({ id: 'unit', title: 'Unit', kind: 'text', width: 'w-28', example });
const expression = (example: string): GridColumn => ({
  id: 'expression',
  title: 'Expression',
  kind: 'expression',
  width: 'w-80',
  example,
});

export const gridDescriptions: Record<GridName, GridDescription> = {
  species: {
    title: 'Species',
    row: 'species',
    purpose: 'What is counted, and how many there are at time 0.',
    columns: [
      id('E'),
      { id: 'initialCount', title: 'Initial count', kind: 'number', width: 'w-32', example: '120' },
      { id: 'boundary', title: 'Boundary', kind: 'tick', width: 'w-24' },
      name,
      { id: 'compartment', title: 'Compartment', kind: 'text', width: 'w-32' },
      { id: 'concentration', title: 'Means concentration', kind: 'tick', width: 'w-28' },
    ],
  },
  parameters: {
    title: 'Parameters',
    row: 'parameter',
    purpose: 'Constants with names: rate constants, thresholds, sizes.',
    columns: [
      id('k_on'),
      { id: 'value', title: 'Value', kind: 'number', width: 'w-32', example: '0.002' },
      unit('1/s'),
      name,
    ],
  },
  reactions: {
    title: 'Reactions',
    row: 'reaction',
    purpose: 'Chemical equations as you would write them: E + S → C, ∅ -> X, 2 A → D.',
    columns: [
      id('bind'),
      { id: 'equation', title: 'Equation', kind: 'equation', width: 'w-60', example: 'E + S → C' },
      { id: 'law', title: 'Rate law', kind: 'choice', width: 'w-36', choices: Object.values(lawWords) },
      { id: 'rate', title: 'Constant or expression', kind: 'expression', width: 'w-60', example: 'k_on' },
      name,
    ],
  },
  compartments: {
    title: 'Compartments',
    row: 'compartment',
    purpose: 'Volumes, for species whose id means a concentration in expressions.',
    columns: [
      id('cell'),
      { id: 'size', title: 'Size', kind: 'number', width: 'w-32', example: '1e-15' },
      unit('L'),
      name,
    ],
  },
  assignmentRules: {
    title: 'Assignment rules',
    row: 'rule',
    purpose: 'A parameter, or a species that no reaction changes, that always equals an expression.',
    columns: [
      { id: 'variable', title: 'Variable', kind: 'text', width: 'w-36', example: 'E_total' },
      expression('E + C'),
    ],
  },
  localParameters: {
    title: 'Local parameters',
    row: 'local parameter',
    purpose: 'Parameters known to one reaction only, as some files have them.',
    columns: [
      { id: 'reaction', title: 'Reaction', kind: 'text', width: 'w-36', example: 'bind' },
      id('k'),
      { id: 'value', title: 'Value', kind: 'number', width: 'w-32', example: '0.002' },
      unit('1/s'),
    ],
  },
  observables: {
    title: 'Observables',
    row: 'observable',
    purpose: 'Quantities to report beside the species, computed from them.',
    columns: [id('bound'), expression('C / (E + C)'), name],
  },
  changes: {
    title: 'Timed and triggered changes',
    row: 'change',
    purpose: 'Doses, resets, switches: what is set at a time, or whenever a condition becomes true.',
    columns: [
      id('dose'),
      { id: 'when', title: 'Happens', kind: 'choice', width: 'w-32', choices: Object.values(whenWords) },
      { id: 'at', title: 'Time or condition', kind: 'expression', width: 'w-44', example: '24' },
      { id: 'every', title: 'Again every', kind: 'expression', width: 'w-28' },
      { id: 'times', title: 'Times in all', kind: 'number', width: 'w-28' },
      { id: 'start', title: 'Also if true at 0', kind: 'tick', width: 'w-28' },
      { id: 'sets', title: 'Sets', kind: 'expression', width: 'w-60', example: 'S = S + 100; k = 0' },
      name,
    ],
  },
};

/** Columns of the species grid that wait until there is a compartment. */
export const compartmentColumns: ReadonlySet<string> = new Set(['compartment', 'concentration']);
