/** Makes an Astro endpoint from a contract and one service call: turn strangers away, parse, call, respond. */
import type { APIContext, APIRoute } from 'astro';
import type { z } from 'zod';
import type { Contract } from '@/contracts/contract.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { principalName } from '@/domain/teams/actor.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { admit } from './admit.ts';
import { answerOnce, hashBody, type Idempotency } from './answer-once.ts';
import { outageResponse, problemResponse } from './problem.ts';
import { readBody } from './read-body.ts';

type Parsed<S> = S extends z.ZodType ? z.output<S> : undefined;

export interface EndpointRequest<C extends Contract> {
  actor: Actor;
  /** Path parameters, such as `team`; always strings. */
  parameters: Record<string, string>;
  query: Parsed<C['query']>;
  body: Parsed<C['body']>;
  /** The raw text when the body came as one of `textBodyTypes`; null otherwise. */
  textBody: { contentType: string; text: string } | null;
  idempotency: Idempotency | undefined;
  context: APIContext;
}

/** What a handler may answer: a result whose value is the JSON body, or a response of its own (files, streams). */
type Handled = Result<unknown> | Response;

export function endpoint<const C extends Contract>(
  contract: C,
  handle: (request: EndpointRequest<C>) => Promise<Handled>,
): APIRoute {
  return async (context) => {
    const { requestId } = context.locals;
    try {
      const admitted = await admit({
        access: contract.access,
        actor: context.locals.actor,
        team: context.params['team'],
      });
      if (!admitted.ok) return problemResponse(admitted, requestId);
      const request = await parseRequest(contract, context);
      if (!request.ok) return problemResponse(request, requestId);
      const handled =
        contract.idempotency === 'transaction'
          ? await answerOnce(request.value.idempotency, async () => {
              const answer = await handle(request.value);
              if (answer instanceof Response) throw new Error(`${contract.id} is idempotent and must answer a result.`);
              return answer;
            })
          : await handle(request.value);
      if (handled instanceof Response) return handled;
      return handled.ok ? jsonResponse(contract, handled.value) : problemResponse(handled, requestId);
    } catch (error) {
      return outageResponse(error, requestId);
    }
  };
}

function jsonResponse(contract: Contract, value: unknown): Response {
  const answer = contract.answers[0];
  if (!answer) throw new Error(`${contract.id} states no answer.`);
  if (!answer.schema) return new Response(null, { status: answer.status, headers: { 'Cache-Control': 'no-store' } });
  return new Response(JSON.stringify(value), {
    status: answer.status,
    headers: { 'Content-Type': 'application/json', 'Cache-Control': 'no-store' },
  });
}

async function parseRequest<C extends Contract>(contract: C, context: APIContext): Promise<Result<EndpointRequest<C>>> {
  const query = parseWith(contract.query, Object.fromEntries(context.url.searchParams), 'query');
  if (!query.ok) return query;
  const { actor } = context.locals;
  const request = {
    actor,
    parameters: Object.fromEntries(Object.entries(context.params).map(([name, value]) => [name, value ?? ''])),
    query: query.value as Parsed<C['query']>,
    body: undefined as Parsed<C['body']>,
    textBody: null as EndpointRequest<C>['textBody'],
    idempotency: undefined as Idempotency | undefined,
    context,
  };
  if (!contract.body && !contract.textBodyTypes) return accept(request);

  const contentType = (context.request.headers.get('content-type') ?? '').split(';')[0]?.trim().toLowerCase() ?? '';
  const isText = contract.textBodyTypes?.includes(contentType) ?? false;
  if (!isText && !contract.body)
    return refuse('unsupported_media_type', `Send one of: ${contract.textBodyTypes?.join(', ')}.`);
  const raw = await readBody(
    context.request,
    contract.bodyBytes ?? (isText ? limits.modelBodyBytes : limits.bodyBytes),
  );
  if (!raw.ok) return raw;
  const key = contract.idempotency ? context.request.headers.get('idempotency-key') : null;
  if (key !== null) {
    if (key.length === 0 || key.length > limits.idempotencyKeyCharacters)
      return refuse('invalid_input', `An Idempotency-Key has 1 to ${limits.idempotencyKeyCharacters} characters.`);
    const scope = `${principalName(actor)} | ${context.params['team'] ?? '-'} | ${contract.method} ${context.url.pathname}`;
    request.idempotency = { scope, key, bodyHash: hashBody(raw.value) };
  }
  if (isText) {
    request.textBody = { contentType, text: raw.value };
    return accept(request);
  }
  if (contentType !== 'application/json')
    return raw.value === '' && contract.body?.safeParse({}).success
      ? accept({ ...request, body: contract.body.parse({}) as Parsed<C['body']> })
      : refuse('unsupported_media_type', 'Send the body as application/json.');
  const body = parseJson(raw.value);
  if (!body.ok) return body;
  const parsed = parseWith(contract.body, body.value, '');
  return parsed.ok ? accept({ ...request, body: parsed.value as Parsed<C['body']> }) : parsed;
}

function parseJson(text: string): Result<unknown> {
  try {
    return accept(JSON.parse(text) as unknown);
  } catch (error) {
    return refuse('invalid_input', `The body is not JSON: ${(error as Error).message}.`);
  }
}

/** Checks a value with a schema; faults carry a path such as `overrides.parameters.k1` or `query.limit`. */
export function parseWith(schema: z.ZodType | undefined, value: unknown, prefix: string): Result<unknown> {
  if (!schema) return accept(undefined);
  const parsed = schema.safeParse(value);
  if (parsed.success) return accept(parsed.data);
  const errors = parsed.error.issues.slice(0, 100).map((issue) => ({
    path: [prefix, ...issue.path.map(String)].filter(Boolean).join('.'),
    code: issue.code ?? 'invalid',
    message: issue.message,
  }));
  return refuse('invalid_input', 'Some fields are not usable; nothing was stored.', { errors });
}
