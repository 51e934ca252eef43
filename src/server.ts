/** The production entry: boot first, then serve; SIGTERM or SIGINT closes streams, pool and database and exits 0. */
import http, { type RequestListener } from 'node:http';
import type { SSRManifest } from 'astro';
import { createExports as createNodeExports } from '@astrojs/node/server.js';
import { bootServer } from './server/boot.ts';
import { env } from './server/env.ts';
import { closeOpenStreams } from './server/http/open-streams.ts';
import { trustForwardedAddress } from './server/http/trust-forwarded-address.ts';
import { log } from './server/log.ts';

type NodeOptions = Parameters<typeof createNodeExports>[1];

export const createExports = (): Record<string, never> => ({});

export function start(manifest: SSRManifest, options: NodeOptions): void {
  serve(manifest, options).catch((error: unknown) => {
    console.error(error instanceof Error ? error.message : error);
    process.exit(1);
  });
}

async function serve(manifest: SSRManifest, options: NodeOptions): Promise<void> {
  const { HOST, PORT, PUBLIC_URL, TRUST_PROXY } = env();
  const shutDown = await bootServer();
  const { handler } = createNodeExports(manifest, { ...options, mode: 'standalone' });
  const answer = handler as RequestListener;
  const server = http.createServer((request, response) => {
    trustForwardedAddress(request.headers, { trustProxy: TRUST_PROXY });
    answer(request, response);
  });
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(PORT, HOST, resolve);
  });
  log().info({ url: PUBLIC_URL, port: PORT }, 'serving');

  let stopping = false;
  const stop = async (signal: string): Promise<void> => {
    if (stopping) return;
    stopping = true;
    log().info({ signal }, 'stopping');
    closeOpenStreams();
    server.close();
    server.closeIdleConnections();
    await shutDown();
    server.closeAllConnections();
    process.exit(0);
  };
  for (const signal of ['SIGTERM', 'SIGINT'] as const)
    process.once(signal, () => {
      stop(signal).catch((error: unknown) => {
        log().error({ err: error }, 'shutdown failed');
        process.exit(1);
      });
    });
}
