/** The draft on screen with its history, kept in this browser until it is saved as a version. */
import { useCallback, useEffect, useReducer, useRef, useState } from 'react';
import { draftHistory, historyOf } from './draft-history.ts';
import { gridNames, sameContent, type Draft } from './draft.ts';

interface Kept {
  savedAt: string;
  draft: Draft;
}

export const draftStorageKey = (team: string, model: string | null, version: number | null): string =>
  `burette:draft:${team}:${model ?? 'new'}${version === null ? '' : `@${version}`}`;

/** Milliseconds after the last change at which the draft is written down. */
const keepAfterMs = 300;

/** What another page left for the editor to open with, such as an import. */
export function keepDraft(key: string, draft: Draft): boolean {
  try {
    localStorage.setItem(key, JSON.stringify({ savedAt: new Date().toISOString(), draft } satisfies Kept));
    return true;
  } catch {
    return false;
  }
}

function keptDraft(key: string): Kept | null {
  try {
    const kept = JSON.parse(localStorage.getItem(key) ?? 'null') as Kept | null;
    const grids = kept?.draft?.grids;
    // A draft of an older shape is left alone rather than shown half.
    return grids && gridNames.every((grid) => Array.isArray(grids[grid])) ? kept : null;
  } catch {
    return null;
  }
}

/** `initial` is what is stored on the server; the draft differs from it until saved. */
export function useDraft(storageKey: string, initial: Draft, readOnly: boolean) {
  const [history, change] = useReducer(draftHistory, initial, historyOf);
  const [restoredAt, setRestoredAt] = useState<string | null>(null);
  const [keeping, setKeeping] = useState<'kept' | 'pending' | 'refused'>('kept');
  const ready = useRef(false);
  const draft = history.present;
  const changed = !sameContent(draft, initial);

  useEffect(() => {
    const kept = readOnly ? null : keptDraft(storageKey);
    if (kept !== null && !sameContent(kept.draft, initial)) {
      change({ kind: 'reset', draft: kept.draft });
      setRestoredAt(kept.savedAt);
    }
    ready.current = true;
    // Once, when the page opens.
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, []);

  const keep = useCallback((): void => {
    if (!ready.current || readOnly) return;
    if (!changed) {
      localStorage.removeItem(storageKey);
      setKeeping('kept');
    } else setKeeping(keepDraft(storageKey, draft) ? 'kept' : 'refused');
  }, [changed, draft, readOnly, storageKey]);

  useEffect(() => {
    if (!ready.current) return;
    setKeeping('pending');
    const timer = setTimeout(keep, keepAfterMs);
    window.addEventListener('pagehide', keep);
    return () => {
      clearTimeout(timer);
      window.removeEventListener('pagehide', keep);
    };
  }, [keep]);

  /** Throws the draft away: after it was saved as a version, or because it is no longer wanted. */
  const forget = useCallback(() => {
    ready.current = false;
    localStorage.removeItem(storageKey);
  }, [storageKey]);

  return {
    draft,
    change,
    changed,
    canUndo: history.past.length > 0,
    canRedo: history.future.length > 0,
    restoredAt,
    keeping,
    forget,
    discard: () => {
      change({ kind: 'reset', draft: initial });
      setRestoredAt(null);
    },
  };
}
