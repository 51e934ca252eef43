import * as contracts from '@/contracts/operate.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readBooks } from '@/server/operate/read-books.ts';

export const GET = endpoint(contracts.readBooks, ({ actor }) => readBooks({ actor }));
