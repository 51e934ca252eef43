/** The query of every list by cursor. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';

export const pageQuery = z.object({
  limit: z.coerce.number().int().min(1).max(limits.listPage).default(limits.listPageDefault),
  /** `nextCursor` of the page before. */
  cursor: z.string().max(100).optional(),
});

/** `2026-12-01`, a day that exists. */
export const day = z
  .string()
  .regex(/^20\d\d-\d\d-\d\d$/, 'A day such as 2026-12-01.')
  .refine((text) => {
    const time = Date.parse(`${text}T00:00:00Z`);
    return !Number.isNaN(time) && new Date(time).toISOString().startsWith(text);
  }, 'There is no such day.');

/** From the first day to the last one, both included, in the team's time zone. */
export const dayRange = { from: day.optional(), to: day.optional() };
