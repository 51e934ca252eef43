/** Teams, members, invitations, project codes, API tokens. */
import type { Contract } from './contract.ts';

export const teamContracts: Contract[] = [];
