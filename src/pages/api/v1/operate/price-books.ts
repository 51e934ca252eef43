import * as contracts from '@/contracts/operate.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { addPriceBook } from '@/server/operate/add-price-book.ts';
import { listPriceBooks } from '@/server/operate/list-price-books.ts';

export const GET = endpoint(contracts.listPriceBooks, ({ actor }) => listPriceBooks({ actor }));

export const POST = endpoint(contracts.addPriceBook, ({ actor, body }) => addPriceBook({ actor, ...body }));
