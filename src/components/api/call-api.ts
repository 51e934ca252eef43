/** Calls an endpoint by its contract from an island: same origin, JSON, refusals as values. */
import type { z } from 'zod';
import type { Contract } from '@/contracts/contract.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';

type AnswerOf<C extends Contract> = C['answers'][0] extends { schema: infer S extends z.ZodType } ? z.output<S> : null;
type BodyOf<C extends Contract> = C['body'] extends z.ZodType ? z.input<C['body']> : undefined;

export type Called<T> = { ok: true; value: T } | { ok: false; problem: ProblemDocument };

export interface CallOptions<C extends Contract> {
  /** Values of `{…}` in the path. */
  path?: Record<string, string>;
  query?: Record<string, string | number | undefined>;
  body?: BodyOf<C>;
  /** Instead of `body`, for contracts that take text: SBML. */
  textBody?: { contentType: string; text: string };
  /** Sends one when the contract remembers answers; made once per intent, kept over retries of the same intent. */
  idempotencyKey?: string;
  signal?: AbortSignal;
}

export function urlOf(
  contract: Contract,
  path: Record<string, string> = {},
  query: CallOptions<Contract>['query'] = {},
): string {
  const filled = contract.path.replaceAll(/\{(\w+)\}/g, (_, name: string) => encodeURIComponent(path[name] ?? ''));
  const search = new URLSearchParams();
  for (const [name, value] of Object.entries(query)) if (value !== undefined) search.set(name, String(value));
  return search.size > 0 ? `${filled}?${search}` : filled;
}

export async function callApi<const C extends Contract>(
  contract: C,
  options: CallOptions<C> = {},
): Promise<Called<AnswerOf<C>>> {
  const headers: Record<string, string> = { Accept: 'application/json' };
  const { body, textBody } = options;
  if (textBody) headers['Content-Type'] = textBody.contentType;
  else if (body !== undefined) headers['Content-Type'] = 'application/json';
  if (options.idempotencyKey) headers['Idempotency-Key'] = options.idempotencyKey;
  let response: Response;
  try {
    response = await fetch(urlOf(contract, options.path, options.query), {
      method: contract.method,
      headers,
      body: textBody ? textBody.text : body === undefined ? null : JSON.stringify(body),
      credentials: 'same-origin',
      signal: options.signal ?? null,
    });
  } catch (error) {
    if ((error as Error).name === 'AbortError') throw error;
    return { ok: false, problem: unreachable };
  }
  const text = await response.text();
  if (response.ok) return { ok: true, value: (text === '' ? null : JSON.parse(text)) as AnswerOf<C> };
  try {
    return { ok: false, problem: JSON.parse(text) as ProblemDocument };
  } catch {
    return { ok: false, problem: { ...unreachable, status: response.status } };
  }
}

const unreachable: ProblemDocument = {
  type: 'about:blank',
  title: 'No connection',
  status: 0,
  code: 'unreachable',
  detail: 'The server could not be reached. Nothing of yours was lost; try again when the connection is back.',
  requestId: '',
};
