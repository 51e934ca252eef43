/** What of mail runs beside the requests. */
import type { Part } from '../part.ts';

export const mailPart: Part = { name: 'mail', start: async () => async () => undefined };
