/** Undo and redo over drafts: typing in one cell is one step. */
import { changeDraft, type Change } from './change-draft.ts';
import type { Draft } from './draft.ts';

export interface DraftHistory {
  past: Draft[];
  present: Draft;
  future: Draft[];
  /** The cell being typed into; further typing there joins the same step. */
  typingIn: string | null;
}

export type HistoryAction =
  | Change
  | { kind: 'undo' }
  | { kind: 'redo' }
  /** Begins anew, with nothing to undo: another version was opened. */
  | { kind: 'reset'; draft: Draft };

/** Steps that are remembered. */
const mostSteps = 200;

export const historyOf = (draft: Draft): DraftHistory => ({ past: [], present: draft, future: [], typingIn: null });

function placeTypedIn(action: Change): string | null {
  if (action.kind === 'cell') return `${action.place.grid}/${action.place.key}/${action.place.column}`;
  return action.kind === 'name' || action.kind === 'timeUnit' ? action.kind : null;
}

export function draftHistory(history: DraftHistory, action: HistoryAction): DraftHistory {
  const { past, present, future } = history;
  switch (action.kind) {
    case 'undo': {
      const previous = past.at(-1);
      if (previous === undefined) return history;
      return { past: past.slice(0, -1), present: previous, future: [present, ...future], typingIn: null };
    }
    case 'redo': {
      const [next, ...later] = future;
      if (next === undefined) return history;
      return { past: [...past, present], present: next, future: later, typingIn: null };
    }
    case 'reset':
      return historyOf(action.draft);
    default: {
      const changed = changeDraft(present, action);
      if (changed === present) return history;
      const typingIn = placeTypedIn(action);
      // Tidying what was just typed belongs to the typing.
      const joins = (typingIn !== null && typingIn === history.typingIn) || action.kind === 'tidyEquation';
      return {
        past: joins && past.length > 0 ? past : [...past, present].slice(-mostSteps),
        present: changed,
        future: [],
        typingIn,
      };
    }
  }
}
