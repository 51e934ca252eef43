/** Currencies in words. */
import type { Currency } from '@/domain/pricing/price-book.ts';

export const currencyWords: Record<Currency, string> = { EUR: 'Euro', GBP: 'Pound sterling', USD: 'US dollar' };
