/** An id for one request, shown in answers and logs so that a person can point at it. */
import { ulid } from 'ulid';

export const newRequestId = (): string => `req_${ulid()}`;
