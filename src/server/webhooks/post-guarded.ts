/**
 * Posts to an address that a customer typed: the name is resolved once, every address checked, and the connection made
 * to a checked address, so that a name which changes its mind in between gains nothing. Redirects are not followed.
 */
import { lookup } from 'node:dns/promises';
import http from 'node:http';
import https from 'node:https';
import { isIP, type BlockList } from 'node:net';
import { env } from '../env.ts';
import { isAllowed, isForbidden, networksOf } from './forbidden-address.ts';

export const answerBytesMaximum = 64 * 1024;
const ports = { 'http:': 80, 'https:': 443 } as const;

/** Answers every address of a name. Tests bring their own. */
export type Resolver = (name: string) => Promise<string[]>;

const resolveByHost: Resolver = async (name) =>
  (await lookup(name, { all: true, order: 'ipv4first' })).map(({ address }) => address);

export interface PostOptions {
  url: string;
  body: string;
  headers: Record<string, string>;
  /** Ends the attempt early: the house is stopping. */
  signal: AbortSignal;
  timeoutMs?: number;
  resolve?: Resolver;
  allowed?: BlockList;
}

export type Posted = { status: number } | { fault: string };

/** Never throws: a fault is a sentence for the delivery log. */
export async function postGuarded(options: PostOptions): Promise<Posted> {
  const { timeoutMs = 10_000, signal } = options;
  const timeout = AbortSignal.timeout(timeoutMs);
  const ending = AbortSignal.any([timeout, signal]);
  try {
    return await Promise.race([attempt(options, ending), abortionOf(ending)]);
  } catch (error) {
    if (timeout.aborted) return { fault: `No complete answer within ${timeoutMs / 1000} s.` };
    return { fault: (error as Error).message.slice(0, 300) };
  }
}

const abortionOf = (signal: AbortSignal): Promise<never> =>
  new Promise((_, reject) => signal.addEventListener('abort', () => reject(new Error('Stopped.')), { once: true }));

async function attempt(options: PostOptions, signal: AbortSignal): Promise<Posted> {
  const { resolve = resolveByHost, allowed = networksOf(env().WEBHOOK_ALLOWED_NETWORKS) } = options;
  const url = new URL(options.url);
  if (url.protocol !== 'http:' && url.protocol !== 'https:') return { fault: 'Only http and https are delivered to.' };
  const name = url.hostname.replace(/^\[(.*)\]$/, '$1');
  const addresses = isIP(name) ? [name] : await resolve(name);
  const [address] = addresses;
  if (address === undefined) return { fault: `${name} has no address.` };
  const forbidden = addresses.find((one) => isForbidden(one, allowed));
  if (forbidden !== undefined)
    return { fault: `${name} has the address ${forbidden}, which is not on the public internet.` };
  const port = url.port === '' ? ports[url.protocol] : Number(url.port);
  if (port !== ports['https:'] && port !== ports['http:'] && !addresses.every((one) => isAllowed(one, allowed)))
    return { fault: `Port ${port} is not delivered to; only 443 and 80 are.` };
  return send({ ...options, url, name, address, port, signal });
}

function send(
  options: Omit<PostOptions, 'url'> & { url: URL; name: string; address: string; port: number },
): Promise<Posted> {
  const { url, name, address, port, body, headers, signal } = options;
  const request = (url.protocol === 'https:' ? https : http).request;
  return new Promise((resolve, reject) => {
    const sending = request(
      {
        host: address,
        port,
        path: `${url.pathname}${url.search}`,
        method: 'POST',
        headers: { ...headers, Host: url.host, 'Content-Length': Buffer.byteLength(body) },
        // The certificate must be the name's, though the connection goes to a number.
        ...(isIP(name) ? {} : { servername: name }),
        agent: false,
        signal,
      },
      (answer) => {
        const status = answer.statusCode ?? 0;
        let bytes = 0;
        const settle = (): void => {
          resolve({ status });
          sending.destroy();
        };
        answer.on('data', (chunk: Buffer) => {
          bytes += chunk.length;
          if (bytes >= answerBytesMaximum) settle();
        });
        answer.on('end', settle);
        answer.on('error', reject);
      },
    );
    sending.on('error', reject);
    sending.end(body);
  });
}
