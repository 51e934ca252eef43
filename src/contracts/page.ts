/** The query of every list by cursor. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';

export const pageQuery = z.object({
  limit: z.coerce.number().int().min(1).max(limits.listPage).default(limits.listPageDefault),
  /** `nextCursor` of the page before. */
  cursor: z.string().max(100).optional(),
});
