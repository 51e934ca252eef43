import { readPriceBook } from '@/contracts/billing.ts';
import { showPriceBook } from '@/server/billing/show-price-book.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(readPriceBook, () => showPriceBook());
