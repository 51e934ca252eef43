/** Sign-up, sign-in, sign-out, verification, reset. */
import type { Contract } from './contract.ts';

export const authContracts: Contract[] = [];
