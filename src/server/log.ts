/** Structured logs (pino): one JSON line an entry, request ids, secrets removed by name. */
import { AsyncLocalStorage } from 'node:async_hooks';
import pino, { type Logger } from 'pino';
import { env } from './env.ts';

const requestLog = new AsyncLocalStorage<Logger>();
const house = globalThis as typeof globalThis & { buretteLog?: Logger };

const secretNames = ['password', 'token', 'cookie', 'authorization', 'secret', 'sessionId', 'link', 'signature'];

const rootLog = (): Logger =>
  (house.buretteLog ??= pino({
    level: env().LOG_LEVEL,
    base: null,
    timestamp: pino.stdTimeFunctions.isoTime,
    redact: { paths: secretNames.flatMap((name) => [name, `*.${name}`, `*.*.${name}`]), censor: '[removed]' },
  }));

/** The log of the present request, or the process's own outside one. */
export const log = (): Logger => requestLog.getStore() ?? rootLog();

export const withRequestLog = <T>(fields: Record<string, unknown>, work: () => T): T =>
  requestLog.run(rootLog().child(fields), work);
