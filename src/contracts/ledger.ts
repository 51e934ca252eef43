/** Credits and the ledger. */
import type { Contract } from './contract.ts';

export const ledgerContracts: Contract[] = [];
