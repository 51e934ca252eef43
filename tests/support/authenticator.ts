/** An authenticator app of our own: RFC 4226 and RFC 6238 by the letter, without the product's code. */
import { createHmac } from 'node:crypto';

/** `secret` in base32; `shift` in steps of 30 s from `nowMs`. */
export function authenticatorCode(secret: string, nowMs: number, shift = 0): string {
  let bits = 0n;
  for (const letter of secret) bits = bits * 32n + BigInt('ABCDEFGHIJKLMNOPQRSTUVWXYZ234567'.indexOf(letter));
  const key = Buffer.from(bits.toString(16).padStart(40, '0'), 'hex');
  const step = Math.floor(nowMs / 30_000) + shift;
  const counter = Buffer.from(step.toString(16).padStart(16, '0'), 'hex');
  const digest = createHmac('sha1', key).update(counter).digest('hex');
  const offset = parseInt(digest.at(-1)!, 16) * 2;
  return String((parseInt(digest.slice(offset, offset + 8), 16) & 0x7fffffff) % 1_000_000).padStart(6, '0');
}
