/** The OpenAPI 3.1 document, made from the contracts; schemas are zod's own JSON Schema output. */
import { z } from 'zod';
import type { RefusalCode } from '@/domain/refusals.ts';
import type { Contract } from './contract.ts';
import { errorTable, problemDocument } from './errors.ts';

type Json = Record<string, unknown>;

const schemaOf = (schema: z.ZodType, io: 'input' | 'output'): Json => {
  const { $schema: _, ...rest } = z.toJSONSchema(schema, { io, unrepresentable: 'any' });
  return rest;
};

function parameters(contract: Contract): Json[] {
  const inPath = [...contract.path.matchAll(/\{(\w+)\}/g)].map(([, name]) => ({
    name,
    in: 'path',
    required: true,
    schema: { type: 'string' },
  }));
  const query = contract.query ? schemaOf(contract.query, 'input') : { properties: {}, required: [] };
  const required = (query['required'] ?? []) as string[];
  const inQuery = Object.entries((query['properties'] ?? {}) as Record<string, Json>).map(([name, schema]) => ({
    name,
    in: 'query',
    required: required.includes(name),
    schema,
  }));
  const key = contract.idempotency
    ? [{ name: 'Idempotency-Key', in: 'header', required: false, schema: { type: 'string', maxLength: 200 } }]
    : [];
  return [...inPath, ...inQuery, ...key];
}

function operation(contract: Contract): Json {
  const content: Json = {};
  if (contract.body) content['application/json'] = { schema: schemaOf(contract.body, 'input') };
  for (const type of contract.textBodyTypes ?? []) content[type] = { schema: { type: 'string' } };
  const answers = contract.answers.map((answer) => {
    const type = answer.contentType ?? (answer.schema ? 'application/json' : undefined);
    const schema = answer.schema ? schemaOf(answer.schema, 'output') : { type: 'string', format: 'binary' };
    return [answer.status, { description: answer.description, ...(type ? { content: { [type]: { schema } } } : {}) }];
  });
  const byStatus = new Map<number, RefusalCode[]>();
  for (const code of contract.refusals) {
    const { status } = errorTable[code];
    byStatus.set(status, [...(byStatus.get(status) ?? []), code]);
  }
  const problems = [...byStatus].map(([status, codes]) => [
    status,
    {
      description: codes.map((code) => `${code}: ${errorTable[code].title}`).join('; '),
      content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } },
    },
  ]);
  return {
    operationId: contract.id,
    tags: [contract.feature],
    summary: contract.summary,
    ...(contract.access.kind === 'team' ? { 'x-permission': contract.access.permission } : {}),
    security: contract.access.kind === 'public' ? [] : [{ bearer: [] }, { session: [] }],
    parameters: parameters(contract),
    ...(Object.keys(content).length ? { requestBody: { required: true, content } } : {}),
    responses: Object.fromEntries([...answers, ...problems]),
  };
}

export function openApiDocument(contracts: Contract[], publicUrl: string): Json {
  const paths: Record<string, Json> = {};
  for (const contract of contracts) {
    const path = (paths[contract.path] ??= {});
    path[contract.method.toLowerCase()] = operation(contract);
  }
  return {
    openapi: '3.1.0',
    info: { title: 'Burette API', version: '1', description: 'Metered stochastic-simulation compute.' },
    servers: [{ url: publicUrl }],
    paths,
    components: {
      schemas: { Problem: schemaOf(problemDocument, 'output') },
      securitySchemes: {
        bearer: { type: 'http', scheme: 'bearer' },
        session: { type: 'apiKey', in: 'cookie', name: 'burette_session' },
      },
    },
  };
}
