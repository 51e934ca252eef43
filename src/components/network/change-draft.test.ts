import { describe, expect, it } from 'vitest';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { normaliseDocument } from '@/domain/network/normalise-document.ts';
import { cellsOfClipboard, changeDraft, footKey, type Change } from './change-draft.ts';
import { draftHistory, historyOf, type HistoryAction } from './draft-history.ts';
import { draftOf, emptyDraft, sameContent, type Draft } from './draft.ts';
import { missingNames } from './missing-names.ts';
import { cellOfPath, numberOf, writtenDocument } from './written-document.ts';

const enzyme: NetworkDocument = {
  timeUnit: 's',
  compartments: [{ id: 'cell', size: 1e-15, unit: 'L' }],
  species: [
    { id: 'E', initialCount: 10, name: 'enzyme' },
    { id: 'S', initialCount: 300, compartment: 'cell', meaning: 'concentration' },
    { id: 'W', initialCount: 5, boundary: true },
  ],
  parameters: [{ id: 'k1', value: 0.002, unit: '1/s' }],
  assignmentRules: [{ variable: 'total', expression: 'E + S' }],
  reactions: [
    { id: 'bind', equation: 'E + S → C', rateLaw: { kind: 'massAction', constant: 'k1' } },
    {
      id: 'turn',
      equation: 'C → E + P',
      rateLaw: { kind: 'expression', expression: 'kc * C' },
      localParameters: [{ id: 'kc', value: 0.5 }],
    },
  ],
  observables: [{ id: 'bound', expression: 'C / (E + C)' }],
};

const after = (draft: Draft, ...changes: Change[]): Draft => changes.reduce(changeDraft, draft);
const ids = (draft: Draft, grid: keyof Draft['grids']): (string | undefined)[] =>
  draft.grids[grid].map(({ cells }) => cells['id']);

describe('cells and documents', () => {
  it('a stored document comes back from its cells unchanged', () => {
    const { document, problems } = writtenDocument(draftOf('Enzyme', enzyme));
    expect(normaliseDocument(document)).toEqual(normaliseDocument(enzyme));
    expect(problems).toEqual([]);
  });

  it('timed and triggered changes go through the grid and back', () => {
    const dose = {
      id: 'dose',
      when: { kind: 'time', time: '10' },
      assignments: [{ variable: 'S', expression: 'S + 5' }],
    };
    const feed = {
      id: 'feed',
      name: 'Feeding',
      when: { kind: 'time', time: 't0', every: '24', times: 5 },
      assignments: [
        { variable: 'S', expression: 'S + 5' },
        { variable: 'E', expression: 'max(E, 2)' },
      ],
    };
    const low = {
      id: 'low',
      when: { kind: 'condition', condition: 'S <= 3', happensAtStart: true },
      assignments: [{ variable: 'S', expression: '9' }],
    };
    const draft = draftOf('Enzyme', { ...enzyme, changes: [dose, feed, low] } as NetworkDocument);
    const next = after(draft, { kind: 'insert', grid: 'species', beforeKey: draft.grids.species[0]!.key });
    expect(writtenDocument(next).document.changes).toEqual([dose, feed, low]);
  });

  it('reads the numbers that spreadsheets and people write, and nothing else', () => {
    expect(['12', ' 1,200 ', '2e-3', '−4', '.5', '1 000'].map(numberOf)).toEqual([12, 1200, 0.002, -4, 0.5, 1000]);
    for (const text of ['', 'twelve', '1,2', '0x10', 'Infinity', '1e']) expect(numberOf(text)).toBeNaN();
  });

  it('blank rows are left out and problems still find their cell', () => {
    const draft = after(draftOf('Enzyme', enzyme), { kind: 'insert', grid: 'species', beforeKey: 'r1' });
    const written = writtenDocument(draft);
    expect(written.document.species).toHaveLength(3);
    const second = draft.grids.species[2]!;
    expect(cellOfPath('species[1].initialCount', written)).toEqual({
      grid: 'species',
      key: second.key,
      column: 'initialCount',
    });
    expect(cellOfPath('reactions[1].rateLaw.expression', written)?.column).toBe('rate');
    expect(cellOfPath('reactions[1].localParameters[0].value', written)?.grid).toBe('localParameters');
    expect(cellOfPath('species', written)).toBeNull();
    expect(cellOfPath('species[9].id', written)).toBeNull();
  });

  it('a local parameter of no reaction is named as a problem with its cell', () => {
    const draft = after(draftOf('Enzyme', enzyme), {
      kind: 'append',
      grid: 'localParameters',
      cells: [{ reaction: 'nowhere', id: 'k', value: '1' }],
    });
    const written = writtenDocument(draft);
    expect(written.problems).toHaveLength(1);
    expect(cellOfPath(written.problems[0]!.path, written)?.column).toBe('reaction');
  });
});

describe('changes', () => {
  it('typing into the row at the foot makes it a row and keeps its key', () => {
    const draft = emptyDraft();
    const key = footKey(draft);
    const next = after(draft, { kind: 'cell', place: { grid: 'species', key, column: 'id' }, text: 'A' });
    expect(next.grids.species).toEqual([{ key, cells: { id: 'A', initialCount: '0' } }]);
    expect(footKey(next)).not.toBe(key);
  });

  it('pastes a block from a spreadsheet, growing the grid and reading ticks', () => {
    const matrix = cellsOfClipboard('A\t1,000\tyes\r\nB\t20\t\r\n')!;
    const draft = emptyDraft();
    const next = after(draft, {
      kind: 'paste',
      place: { grid: 'species', key: footKey(draft), column: 'id' },
      columns: ['id', 'initialCount', 'boundary'],
      matrix,
    });
    expect(writtenDocument(next).document.species).toMatchObject([
      { id: 'A', initialCount: 1000, boundary: true },
      { id: 'B', initialCount: 20, boundary: false },
    ]);
  });

  it('text of one cell is left to the field itself', () => {
    expect(cellsOfClipboard('A + B -> C')).toBeNull();
  });

  it('moves rows, and stops at the ends', () => {
    const draft = draftOf('Enzyme', enzyme);
    const [first] = draft.grids.species;
    const down = after(draft, { kind: 'move', grid: 'species', key: first!.key, by: 1 });
    expect(ids(down, 'species')).toEqual(['S', 'E', 'W']);
    expect(ids(after(draft, { kind: 'move', grid: 'species', key: first!.key, by: -1 }), 'species')).toEqual(
      ids(draft, 'species'),
    );
  });

  it('splits ⇌ into two reactions with different names and the backward constant to be given', () => {
    const draft = after(emptyDraft(), {
      kind: 'append',
      grid: 'reactions',
      cells: [
        { id: 'bind', equation: 'A + B <-> C', rate: 'kf' },
        { id: 'bind_back', equation: 'C → D', rate: 'kd' },
      ],
    });
    const next = after(draft, { kind: 'split', key: draft.grids.reactions[0]!.key });
    expect(next.grids.reactions.map(({ cells }) => [cells['id'], cells['equation'], cells['rate']])).toEqual([
      ['bind', 'A + B → C', 'kf'],
      ['bind_back2', 'C → A + B', undefined],
      ['bind_back', 'C → D', 'kd'],
    ]);
  });

  it('local parameters follow a reaction that is renamed', () => {
    const draft = draftOf('Enzyme', enzyme);
    const place = { grid: 'reactions', key: draft.grids.reactions[1]!.key, column: 'id' } as const;
    const next = after(draft, { kind: 'cell', place, text: 'turnover' });
    expect(writtenDocument(next).document.reactions[1]!.localParameters).toHaveLength(1);
  });
});

describe('history', () => {
  const draft = draftOf('Enzyme', enzyme);
  const place = { grid: 'species', key: draft.grids.species[0]!.key, column: 'id' } as const;
  const run = (...actions: HistoryAction[]) => actions.reduce(draftHistory, historyOf(draft));

  it('typing in one cell is one step, the next cell another', () => {
    const typed = run(
      { kind: 'cell', place, text: 'E1' },
      { kind: 'cell', place, text: 'E12' },
      { kind: 'cell', place: { ...place, column: 'initialCount' }, text: '4' },
    );
    expect(typed.past).toHaveLength(2);
    const undone = draftHistory(draftHistory(typed, { kind: 'undo' }), { kind: 'undo' });
    expect(sameContent(undone.present, draft)).toBe(true);
    expect(draftHistory(draftHistory(undone, { kind: 'redo' }), { kind: 'redo' }).present).toEqual(typed.present);
  });

  it('a change after an undo forgets what was undone', () => {
    const state = run({ kind: 'name', text: 'X' }, { kind: 'undo' }, { kind: 'timeUnit', text: 'h' });
    expect(state.future).toEqual([]);
    expect(state.present).toMatchObject({ name: 'Enzyme', timeUnit: 'h' });
  });

  it('undo and redo at the ends change nothing', () => {
    const state = historyOf(draft);
    expect(draftHistory(state, { kind: 'undo' })).toBe(state);
    expect(draftHistory(state, { kind: 'redo' })).toBe(state);
  });

  it('tidying an equation is undone together with the typing', () => {
    const equation = { grid: 'reactions', key: draft.grids.reactions[0]!.key, column: 'equation' } as const;
    const state = run(
      { kind: 'cell', place: equation, text: 'E+S->2 C' },
      { kind: 'tidyEquation', key: equation.key },
      { kind: 'undo' },
    );
    expect(state.present).toEqual(draft);
  });
});

it('offers the species and parameters that equations and laws use and nobody defined', () => {
  expect(missingNames(enzyme)).toEqual({ species: ['C', 'P'], parameters: [] });
  expect(
    missingNames({
      ...enzyme,
      observables: [],
      reactions: [{ id: 'r', equation: 'A → ∅', rateLaw: { kind: 'expression', expression: 'v * A / (time + E)' } }],
    }),
  ).toEqual({ species: ['A'], parameters: ['v'] });
});
