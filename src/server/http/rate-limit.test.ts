/** What counts as one address. */
import { describe, expect, it } from 'vitest';
import { addressKey } from './rate-limit.ts';

describe('addressKey', () => {
  // Text forms of RFC 4291 section 2.2 and the documentation prefix of RFC 3849 (from memory).
  it.each([
    ['192.0.2.7', '192.0.2.7'],
    ['::ffff:192.0.2.7', '192.0.2.7'],
    ['2001:db8:1:2:3:4:5:6', '2001:db8:1:2::/64'],
    ['2001:0DB8:0001:0002:ffff::1', '2001:db8:1:2::/64'],
    ['2001:db8::1', '2001:db8:0:0::/64'],
    ['::1', '0:0:0:0::/64'],
    ['fe80::1%eth0', 'fe80:0:0:0::/64'],
  ])('takes %s as %s', (address, key) => {
    expect(addressKey(address)).toBe(key);
  });
});
