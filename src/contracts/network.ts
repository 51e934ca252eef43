/** Models and their versions. */
import type { Contract } from './contract.ts';

export const networkContracts: Contract[] = [];
