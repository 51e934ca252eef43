/**
 * Decides what X-Forwarded-For may say before the framework reads it, which believes the first entry of anybody.
 * Behind our own proxy (`TRUST_PROXY`) the last entry counts, the one that the proxy itself wrote; otherwise none does.
 */
import type { IncomingHttpHeaders } from 'node:http';

export function trustForwardedAddress(headers: IncomingHttpHeaders, options: { trustProxy: boolean }): void {
  const last = [headers['x-forwarded-for'] ?? []].flat().join(',').split(',').at(-1)?.trim();
  if (options.trustProxy && last) headers['x-forwarded-for'] = last;
  else delete headers['x-forwarded-for'];
}
