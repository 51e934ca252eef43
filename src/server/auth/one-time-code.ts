/** Time-based one-time codes as authenticator apps make them: RFC 6238 over RFC 4226, SHA-1, steps of 30 s, six figures. */
import { createHmac } from 'node:crypto';

export const stepSeconds = 30;
const alphabet = 'ABCDEFGHIJKLMNOPQRSTUVWXYZ234567';

/** Base32 of RFC 4648 without padding, as apps take secrets. */
export function toBase32(bytes: Uint8Array): string {
  const bits = [...bytes].map((byte) => byte.toString(2).padStart(8, '0')).join('');
  return (bits.match(/.{1,5}/g) ?? []).map((five) => alphabet[parseInt(five.padEnd(5, '0'), 2)]).join('');
}

export function fromBase32(text: string): Buffer {
  const bits = [...text].map((letter) => alphabet.indexOf(letter).toString(2).padStart(5, '0')).join('');
  return Buffer.from((bits.match(/.{8}/g) ?? []).map((eight) => parseInt(eight, 2)));
}

/** HOTP of RFC 4226, section 5.3. */
export function codeAt(secret: Buffer, step: number, figures = 6): string {
  const counter = Buffer.alloc(8);
  counter.writeBigUInt64BE(BigInt(step));
  const digest = createHmac('sha1', secret).update(counter).digest();
  const offset = digest[digest.length - 1]! & 0x0f;
  const number = digest.readUInt32BE(offset) & 0x7fffffff;
  return String(number % 10 ** figures).padStart(figures, '0');
}

/** The step whose code this is: the present one or a neighbour (clocks differ), later than `after`; null if none. */
export function stepOfCode(options: { secret: Buffer; code: string; nowMs: number; after: number }): number | null {
  const { secret, code, nowMs, after } = options;
  const present = Math.floor(nowMs / 1000 / stepSeconds);
  const step = [present, present - 1, present + 1].find((one) => one > after && codeAt(secret, one) === code);
  return step ?? null;
}
