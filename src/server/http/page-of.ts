/** Cuts one page off rows that were read in the order of their ids, one more than the page holds. */
export function pageOf<Row extends { id: string }>(
  rows: Row[],
  limit: number,
): { rows: Row[]; nextCursor: string | null } {
  const page = rows.slice(0, limit);
  return { rows: page, nextCursor: rows.length > limit ? (page.at(-1)?.id ?? null) : null };
}
