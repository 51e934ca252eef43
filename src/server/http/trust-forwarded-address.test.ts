/** Nobody chooses the address that rate limits count. */
import { describe, expect, it } from 'vitest';
import { trustForwardedAddress } from './trust-forwarded-address.ts';

const after = (value: string | undefined, trustProxy: boolean): string | undefined => {
  const headers = value === undefined ? {} : { 'x-forwarded-for': value };
  trustForwardedAddress(headers, { trustProxy });
  return headers['x-forwarded-for'];
};

describe('trustForwardedAddress', () => {
  it('drops the header without a proxy of ours', () => {
    expect(after('203.0.113.9', false)).toBeUndefined();
  });

  it('keeps only what our proxy appended, never what the caller sent', () => {
    expect(after('198.51.100.1, 203.0.113.9', true)).toBe('203.0.113.9');
  });

  it('copes with an absent and an empty header', () => {
    expect(after(undefined, true)).toBeUndefined();
    expect(after(' ', true)).toBeUndefined();
  });
});
