/** What of jobs runs beside the requests. */
import type { Part } from '../part.ts';

export const jobsPart: Part = { name: 'jobs', start: async () => async () => undefined };
