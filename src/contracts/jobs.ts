/** Quotes, jobs, progress, statistics. */
import type { Contract } from './contract.ts';

export const jobContracts: Contract[] = [];
