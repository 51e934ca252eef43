/** Archives of finished jobs. */
import type { Contract } from './contract.ts';

export const archiveContracts: Contract[] = [];
