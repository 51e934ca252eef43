/** Models and their versions. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { contract } from './contract.ts';

const name = z.string().trim().min(1).max(limits.nameCharacters);
const optionalName = z.string().max(limits.nameCharacters).optional();
const identifier = z.string().min(1).max(limits.identifierCharacters);
const expression = z.string().max(limits.expressionCharacters);

const parameterDocument = z.strictObject({
  id: identifier,
  name: optionalName,
  value: z.number(),
  unit: z.string().max(100).optional(),
});

/** The network as JSON: domain/network/document.ts says what each part means. */
export const networkDocument = z.strictObject({
  timeUnit: z.string().max(50).optional(),
  compartments: z
    .array(
      z.strictObject({
        id: identifier,
        name: optionalName,
        size: z.number().nullable(),
        unit: z.string().max(100).optional(),
      }),
    )
    .optional(),
  species: z.array(
    z.strictObject({
      id: identifier,
      name: optionalName,
      compartment: identifier.optional(),
      initialCount: z.number(),
      boundary: z.boolean().optional(),
      meaning: z.enum(['count', 'concentration']).optional(),
    }),
  ),
  parameters: z.array(parameterDocument).optional(),
  assignmentRules: z.array(z.strictObject({ variable: identifier, expression })).optional(),
  reactions: z.array(
    z.strictObject({
      id: identifier,
      name: optionalName,
      equation: z.string().max(limits.expressionCharacters),
      rateLaw: z.discriminatedUnion('kind', [
        z.strictObject({ kind: z.literal('massAction'), constant: expression }),
        z.strictObject({ kind: z.literal('expression'), expression }),
      ]),
      localParameters: z.array(parameterDocument).optional(),
    }),
  ),
  observables: z.array(z.strictObject({ id: identifier, name: optionalName, expression })).optional(),
  changes: z
    .array(
      z.strictObject({
        id: identifier,
        name: optionalName,
        when: z.discriminatedUnion('kind', [
          z.strictObject({
            kind: z.literal('time'),
            time: expression,
            every: expression.optional(),
            times: z.number().int().min(1).max(limits.changeTimes).optional(),
          }),
          z.strictObject({
            kind: z.literal('condition'),
            condition: expression,
            happensAtStart: z.boolean().optional(),
          }),
        ]),
        assignments: z.array(z.strictObject({ variable: identifier, expression })).min(1),
      }),
    )
    .optional(),
});

export const problem = z.object({
  severity: z.enum(['error', 'warning', 'information']),
  path: z.string(),
  code: z.string(),
  message: z.string(),
});

const versionSummary = z.object({
  id: z.string(),
  number: z.number().int(),
  contentHash: z.string(),
  note: z.string(),
  createdAt: z.string(),
  createdBy: z.string().nullable(),
});

const modelSummary = z.object({
  id: z.string(),
  name: z.string(),
  createdAt: z.string(),
  latestVersion: versionSummary,
  speciesCount: z.number().int(),
  reactionCount: z.number().int(),
});

const stored = z.object({
  model: z.object({ id: z.string(), name: z.string() }),
  version: z.object({ id: z.string(), number: z.number().int(), contentHash: z.string() }),
  problems: z.array(problem),
});

const teamPath = '/api/v1/teams/{team}/models';

export const createModel = contract({
  id: 'createModel',
  feature: 'network',
  method: 'POST',
  path: teamPath,
  summary: 'Store a new model as version 1, from JSON or from SBML Level 3',
  access: { kind: 'team', permission: 'models:write' },
  query: z.object({ name: name.optional() }),
  body: z.strictObject({ name, network: networkDocument, note: z.string().max(2_000).optional() }),
  bodyBytes: limits.modelBodyBytes,
  textBodyTypes: ['application/sbml+xml', 'application/xml', 'text/xml'],
  answers: [{ status: 201, description: 'Stored', schema: stored }],
  refusals: [
    'not_signed_in',
    'not_found',
    'forbidden',
    'team_suspended',
    'invalid_input',
    'invalid_network',
    'unreadable_file',
    'too_large',
    'unsupported_media_type',
    'idempotency_key_reused',
  ],
  idempotency: 'transaction',
});

export const listModels = contract({
  id: 'listModels',
  feature: 'network',
  method: 'GET',
  path: teamPath,
  summary: 'Models of the team, newest first',
  access: { kind: 'team', permission: 'models:read' },
  query: z.object({
    limit: z.coerce.number().int().min(1).max(limits.listPage).optional(),
    cursor: z.string().max(100).optional(),
  }),
  answers: [
    {
      status: 200,
      description: 'One page',
      schema: z.object({ models: z.array(modelSummary), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: ['not_signed_in', 'not_found', 'forbidden', 'invalid_input'],
});

export const readModel = contract({
  id: 'readModel',
  feature: 'network',
  method: 'GET',
  path: `${teamPath}/{model}`,
  summary: 'One model with its versions, newest first',
  access: { kind: 'team', permission: 'models:read' },
  answers: [
    {
      status: 200,
      description: 'The model',
      schema: z.object({ model: modelSummary, versions: z.array(versionSummary) }),
    },
  ],
  refusals: ['not_signed_in', 'not_found', 'forbidden'],
});

export const updateModel = contract({
  id: 'updateModel',
  feature: 'network',
  method: 'PATCH',
  path: `${teamPath}/{model}`,
  summary: 'Rename a model, or put it away and back; versions and jobs are untouched',
  access: { kind: 'team', permission: 'models:write' },
  body: z.strictObject({ name: name.optional(), archived: z.boolean().optional() }),
  answers: [
    {
      status: 200,
      description: 'Changed',
      schema: z.object({ model: z.object({ id: z.string(), name: z.string() }) }),
    },
  ],
  refusals: ['not_signed_in', 'not_found', 'forbidden', 'team_suspended', 'invalid_input', 'idempotency_key_reused'],
  idempotency: 'transaction',
});

export const saveVersion = contract({
  id: 'saveVersion',
  feature: 'network',
  method: 'POST',
  path: `${teamPath}/{model}/versions`,
  summary: 'Store a new version; refused as version_conflict when somebody saved after `basedOn`',
  access: { kind: 'team', permission: 'models:write' },
  body: z.strictObject({
    network: networkDocument,
    note: z.string().max(2_000).optional(),
    basedOn: z.number().int().min(1),
  }),
  bodyBytes: limits.modelBodyBytes,
  answers: [
    { status: 201, description: 'Stored; an unchanged network answers with the latest version', schema: stored },
  ],
  refusals: [
    'not_signed_in',
    'not_found',
    'forbidden',
    'team_suspended',
    'invalid_input',
    'invalid_network',
    'version_conflict',
    'too_large',
    'unsupported_media_type',
    'idempotency_key_reused',
  ],
  idempotency: 'transaction',
});

export const readVersion = contract({
  id: 'readVersion',
  feature: 'network',
  method: 'GET',
  path: `${teamPath}/{model}/versions/{version}`,
  summary: 'One version with its network and what the checks say of it',
  access: { kind: 'team', permission: 'models:read' },
  answers: [
    {
      status: 200,
      description: 'The version',
      schema: z.object({
        model: z.object({ id: z.string(), name: z.string() }),
        version: versionSummary,
        network: networkDocument,
        problems: z.array(problem),
      }),
    },
  ],
  refusals: ['not_signed_in', 'not_found', 'forbidden'],
});

export const exportSbml = contract({
  id: 'exportSbml',
  feature: 'network',
  method: 'GET',
  path: `${teamPath}/{model}/versions/{version}/sbml`,
  summary: 'The version as SBML Level 3 Version 2',
  access: { kind: 'team', permission: 'models:read' },
  answers: [{ status: 200, description: 'SBML', contentType: 'application/sbml+xml' }],
  refusals: ['not_signed_in', 'not_found', 'forbidden'],
});

export const importSbml = contract({
  id: 'importSbml',
  feature: 'network',
  method: 'POST',
  path: '/api/v1/teams/{team}/model-imports',
  summary: 'Read an SBML file into a network without storing anything: what was understood, and the problems',
  access: { kind: 'team', permission: 'models:write' },
  textBodyTypes: ['application/sbml+xml', 'application/xml', 'text/xml'],
  answers: [
    {
      status: 200,
      description: 'What was understood',
      schema: z.object({ name: z.string(), network: networkDocument, problems: z.array(problem) }),
    },
  ],
  refusals: [
    'not_signed_in',
    'not_found',
    'forbidden',
    'team_suspended',
    'invalid_input',
    'unreadable_file',
    'too_large',
    'unsupported_media_type',
  ],
});

export const networkContracts = [
  createModel,
  listModels,
  readModel,
  updateModel,
  saveVersion,
  readVersion,
  exportSbml,
  importSbml,
];
