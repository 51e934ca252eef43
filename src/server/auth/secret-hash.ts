/** Secrets that we hand out are long and random, so a plain SHA-256 is enough to keep them unreadable in the database. */
import { createHash, randomBytes } from 'node:crypto';

/** 256 bits, URL-safe. */
export const newSecret = (): string => randomBytes(32).toString('base64url');

export const hashSecret = (secret: string): string => createHash('sha256').update(secret).digest('hex');
