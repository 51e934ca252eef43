/** What of billing runs beside the requests. */
import type { Part } from '../part.ts';

export const billingPart: Part = { name: 'billing', start: async () => async () => undefined };
