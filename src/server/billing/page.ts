/** Pages of rows whose ids are ULIDs: newest first, the cursor is the last id seen. */
import { Op, type WhereOptions } from 'sequelize';
import { limits } from '@/domain/limits.ts';

export interface PageRequest {
  limit?: number | undefined;
  cursor?: string | undefined;
}

/** Finds one more than asked for, to know whether there is a next page. */
export async function readPage<T extends { id: string }>(
  request: PageRequest,
  find: (query: { where: WhereOptions; order: [string, string][]; limit: number }) => Promise<T[]>,
): Promise<{ rows: T[]; nextCursor: string | null }> {
  const { limit = limits.listPageDefault, cursor } = request;
  const found = await find({
    where: cursor ? { id: { [Op.lt]: cursor } } : {},
    order: [['id', 'DESC']],
    limit: limit + 1,
  });
  const rows = found.slice(0, limit);
  return { rows, nextCursor: found.length > limit ? (rows.at(-1)?.id ?? null) : null };
}
