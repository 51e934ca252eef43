/** Every contract of the API. The OpenAPI document and the walk over the routes are made from this list. */
import type { Contract } from './contract.ts';
import { systemContracts } from './system.ts';

export const contracts: Contract[] = [...systemContracts];
