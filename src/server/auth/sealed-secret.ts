/**
 * Keeps secrets that we must be able to read again (to sign webhooks, to check one-time codes): AES-256-GCM under a key
 * in the data folder beside the database, so that a leaked copy or backup of the database alone gives none away.
 */
import { createCipheriv, createDecipheriv, randomBytes } from 'node:crypto';
import { readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { env } from '../env.ts';

const nonceBytes = 12;
const tagBytes = 16;

function key(): Buffer {
  const file = path.join(env().BURETTE_DATA_DIR, 'secrets.key');
  try {
    writeFileSync(file, randomBytes(32), { flag: 'wx', mode: 0o600, flush: true });
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error;
  }
  const bytes = readFileSync(file);
  if (bytes.length !== 32) throw new Error(`${file} does not hold a key of 32 bytes.`);
  return bytes;
}

/** `owner` names the row that the secret belongs to: sealed text moved to another row does not open. */
export function sealSecret(secret: string, owner: string): string {
  const nonce = randomBytes(nonceBytes);
  const cipher = createCipheriv('aes-256-gcm', key(), nonce).setAAD(Buffer.from(owner));
  const sealed = Buffer.concat([cipher.update(secret, 'utf8'), cipher.final()]);
  return Buffer.concat([nonce, cipher.getAuthTag(), sealed]).toString('base64');
}

/** Throws when the text was altered, moved, or sealed under another key. */
export function openSecret(sealed: string, owner: string): string {
  const bytes = Buffer.from(sealed, 'base64');
  const decipher = createDecipheriv('aes-256-gcm', key(), bytes.subarray(0, nonceBytes))
    .setAAD(Buffer.from(owner))
    .setAuthTag(bytes.subarray(nonceBytes, nonceBytes + tagBytes));
  return decipher.update(bytes.subarray(nonceBytes + tagBytes), undefined, 'utf8') + decipher.final('utf8');
}
