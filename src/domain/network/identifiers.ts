/** What an identifier is, which words are taken, and the nearest known name for one that was mistyped. */
import { limits } from '../limits.ts';

const pattern = /^[A-Za-z_][A-Za-z0-9_]*$/;

export const functionNames = ['exp', 'ln', 'log10', 'sqrt', 'abs', 'floor', 'ceil', 'min', 'max'] as const;

/** Words that mean something inside expressions, so no species, parameter or reaction may bear them. */
export const reservedWords: ReadonlySet<string> = new Set([
  ...functionNames,
  'and',
  'or',
  'not',
  'piecewise',
  'time',
  '__proto__',
]);

/** Says what is wrong with `id` as an identifier, with advice; null when it is fine. */
export function identifierFault(id: string): { code: string; message: string } | null {
  if (id === '') return { code: 'missing_id', message: 'An id is needed: a letter, then letters, digits or _.' };
  if (id.length > limits.identifierCharacters) {
    return {
      code: 'id_too_long',
      message: `An id has at most ${limits.identifierCharacters} characters; put the long form into the name.`,
    };
  }
  if (reservedWords.has(id)) {
    return {
      code: 'reserved_word',
      message: `“${id}” is a word of the expression language; choose another id, such as ${id}_1.`,
    };
  }
  if (!pattern.test(id)) {
    return {
      code: 'invalid_id',
      message: `“${id}” is not an id: it starts with a letter or _ and holds only letters, digits and _ (no spaces). Put other characters into the name.`,
    };
  }
  return null;
}

/** The known name most like `id` (fewest edits, at most a third of its length), or null. */
export function nearestName(id: string, known: Iterable<string>): string | null {
  const lowered = id.toLowerCase();
  let best: string | null = null;
  let bestEdits = Math.max(1, Math.floor(id.length / 3)) + 1;
  let looked = 0;
  for (const candidate of known) {
    // A suggestion is a courtesy: it must not cost more than the check itself on a huge network.
    if (++looked > 2_000) break;
    if (candidate.toLowerCase() === lowered) return candidate;
    const edits = editDistance(id, candidate, bestEdits);
    if (edits < bestEdits) [best, bestEdits] = [candidate, edits];
  }
  return best;
}

/** Edits between two short words, a swap of neighbours counting as one (optimal string alignment); `bound` when at least that. */
function editDistance(from: string, to: string, bound: number): number {
  if (Math.abs(from.length - to.length) >= bound) return bound;
  const rows = [Array.from({ length: to.length + 1 }, (_, column) => column)];
  for (let row = 1; row <= from.length; row++) {
    const current = [row];
    for (let column = 1; column <= to.length; column++) {
      const same = from[row - 1] === to[column - 1];
      const swapped = row > 1 && column > 1 && from[row - 1] === to[column - 2] && from[row - 2] === to[column - 1];
      const [above, left, diagonal] = [rows[row - 1]![column]!, current[column - 1]!, rows[row - 1]![column - 1]!];
      const swap = swapped ? rows[row - 2]![column - 2]! + 1 : Infinity;
      current.push(Math.min(above + 1, left + 1, diagonal + (same ? 0 : 1), swap));
    }
    rows.push(current);
  }
  return Math.min(bound, rows[from.length]![to.length]!);
}
