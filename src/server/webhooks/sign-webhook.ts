/**
 * Signs a delivery by the open specification “Standard Webhooks” (from memory): HMAC-SHA-256 over `id.timestamp.body`,
 * keyed with the bytes behind the secret's prefix, so that receivers can use the libraries that exist for it.
 */
import { createHmac, randomBytes } from 'node:crypto';

const prefix = 'whsec_';

export const newWebhookSecret = (): string => prefix + randomBytes(32).toString('base64');

export function signWebhook(options: { secret: string; id: string; timestampSeconds: number; body: string }): string {
  const { secret, id, timestampSeconds, body } = options;
  const key = Buffer.from(secret.slice(prefix.length), 'base64');
  return `v1,${createHmac('sha256', key).update(`${id}.${timestampSeconds}.${body}`).digest('base64')}`;
}
