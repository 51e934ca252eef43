/** A fresh Idempotency-Key: made once per intent and kept over its retries. Works without a secure context too. */
export function intentKey(): string {
  return Array.from(crypto.getRandomValues(new Uint8Array(16)), (byte) => byte.toString(16).padStart(2, '0')).join('');
}
