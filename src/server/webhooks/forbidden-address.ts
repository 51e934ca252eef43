/**
 * Decides which addresses webhooks may go to: the public internet only.
 *
 * IPv4: everything but the blocks of IANA's special-purpose registry (RFC 6890 and its successors), multicast and the
 * reserved top. IPv6: only global unicast 2000::/3, less the blocks within it that are special or carry an IPv4 address.
 */
import { BlockList, isIP } from 'node:net';

const special = new BlockList();
for (const [network, bits] of [
  ['0.0.0.0', 8],
  ['10.0.0.0', 8],
  ['100.64.0.0', 10],
  ['127.0.0.0', 8],
  ['169.254.0.0', 16],
  ['172.16.0.0', 12],
  ['192.0.0.0', 24],
  ['192.0.2.0', 24],
  ['192.31.196.0', 24],
  ['192.52.193.0', 24],
  ['192.88.99.0', 24],
  ['192.168.0.0', 16],
  ['192.175.48.0', 24],
  ['198.18.0.0', 15],
  ['198.51.100.0', 24],
  ['203.0.113.0', 24],
  ['224.0.0.0', 4],
  ['240.0.0.0', 4],
] as const)
  special.addSubnet(network, bits, 'ipv4');
const globalUnicast = new BlockList();
globalUnicast.addSubnet('2000::', 3, 'ipv6');
for (const [network, bits] of [
  ['2001::', 23],
  ['2001:db8::', 32],
  ['2002::', 16],
  ['2620:4f:8000::', 48],
  ['3fff::', 20],
] as const)
  special.addSubnet(network, bits, 'ipv6');

/** `address/bits` or a single address, as in WEBHOOK_ALLOWED_NETWORKS; throws on anything else. */
export function networksOf(texts: readonly string[]): BlockList {
  const networks = new BlockList();
  for (const text of texts) {
    const [address = '', bits] = text.split('/');
    const family = isIP(address);
    if (family === 0) throw new Error(`${text} is not a network such as 10.0.4.0/24.`);
    networks.addSubnet(address, bits === undefined ? (family === 4 ? 32 : 128) : Number(bits), familyName(family));
  }
  return networks;
}

const familyName = (family: number): 'ipv4' | 'ipv6' => (family === 4 ? 'ipv4' : 'ipv6');

/** Whether an administrator allowed this very address; such addresses may have any port. */
export const isAllowed = (address: string, allowed: BlockList): boolean =>
  isIP(address) !== 0 && allowed.check(address, familyName(isIP(address)));

/** Whether the address is neither public nor allowed. Text that is no address is forbidden. */
export function isForbidden(address: string, allowed: BlockList = new BlockList()): boolean {
  const family = isIP(address);
  // A zone (fe80::1%eth0) exists on links only.
  if (family === 0 || address.includes('%')) return true;
  if (isAllowed(address, allowed)) return false;
  if (special.check(address, familyName(family))) return true;
  return family === 6 && !globalUnicast.check(address, 'ipv6');
}
