/** The checks of the network on screen, a moment after the last change. */
import { useEffect, useMemo, useState } from 'react';
import { checkNetwork } from '@/domain/network/check-network.ts';
import type { Problem } from '@/domain/network/document.ts';
import type { Draft } from './draft.ts';
import { missingNames, type MissingNames } from './missing-names.ts';
import { cellOfPath, writtenDocument, type CellPlace, type WrittenDocument } from './written-document.ts';

export interface PlacedProblem extends Problem {
  place: CellPlace | null;
}

export interface Checks {
  written: WrittenDocument;
  problems: PlacedProblem[];
  /** The gravest problem of each cell, by `key/column`. */
  byCell: ReadonlyMap<string, Problem>;
  errors: number;
  missing: MissingNames;
}

/** Milliseconds of quiet before the checks run. */
const checkAfterMs = 250;

export function checksOf(draft: Draft): Checks {
  const written = writtenDocument(draft);
  const problems = [...written.problems, ...checkNetwork(written.document)].map((problem) => ({
    ...problem,
    place: cellOfPath(problem.path, written),
  }));
  const byCell = new Map<string, Problem>();
  for (const problem of problems) {
    const cell = problem.place && `${problem.place.key}/${problem.place.column}`;
    // Problems come gravest first, so the first one stays.
    if (cell !== null && !byCell.has(cell)) byCell.set(cell, problem);
  }
  return {
    written,
    problems,
    byCell,
    errors: problems.filter(({ severity }) => severity === 'error').length,
    missing: missingNames(written.document),
  };
}

/** `now` is worked out at once where the answer must be right: before saving. */
export function useChecks(draft: Draft): { checks: Checks; pending: boolean } {
  const [checked, setChecked] = useState(() => ({ draft, checks: checksOf(draft) }));
  useEffect(() => {
    if (checked.draft === draft) return;
    const timer = setTimeout(() => setChecked({ draft, checks: checksOf(draft) }), checkAfterMs);
    return () => clearTimeout(timer);
  }, [draft, checked.draft]);
  return useMemo(() => ({ checks: checked.checks, pending: checked.draft !== draft }), [checked, draft]);
}
