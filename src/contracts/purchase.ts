/** Fields that every purchase of credits shares. Money is `{ amountMinor, currency }`, before or after tax as named. */
import { z } from 'zod';
import { currencies } from '@/domain/pricing/price-book.ts';

export const money = z.object({ amountMinor: z.number().int(), currency: z.string().length(3) });
export type Money = z.infer<typeof money>;

export const currency = z.string().trim().toUpperCase().pipe(z.enum(currencies));
/** `100` or "100": the number of credits. Whether it exists is for the price book to say. */
export const pack = z.union([z.string().trim().min(1).max(20), z.number().int()]).transform(String);
/** One line of text. */
export const line = (most: number) => z.string().trim().min(1).max(most);
