/** The shape of a contract: one endpoint's method, path, input, answers, refusals and access, from which code and OpenAPI follow. */
import type { z } from 'zod';
import type { RefusalCode } from '@/domain/refusals.ts';
import type { Permission } from '@/domain/teams/permissions.ts';

export type Access =
  /** Anybody. */
  | { kind: 'public' }
  /** A person signed in (session), whatever the team. */
  | { kind: 'signedIn' }
  /** A member of `{team}` whose roles (and token scopes) include the permission. */
  | { kind: 'team'; permission: Permission }
  | { kind: 'operator' };

export interface Answer {
  status: number;
  description: string;
  /** JSON body; absent for files and empty answers. */
  schema?: z.ZodType;
  /** Default application/json when there is a schema. */
  contentType?: string;
}

export interface Contract {
  /** Unique, camelCase: OpenAPI's operationId. */
  id: string;
  /** The feature word: network, jobs, ledger, billing, teams, webhooks, archives, auth, system. */
  feature: string;
  method: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';
  /** `/api/v1/teams/{team}/jobs/{job}` */
  path: string;
  summary: string;
  access: Access;
  query?: z.ZodObject;
  body?: z.ZodType;
  /** Other media types of the body, handed over as text (bounded by `limits.modelBodyBytes`): SBML, signed webhooks. */
  textBodyTypes?: string[];
  /** Default `limits.bodyBytes`. */
  bodyBytes?: number;
  answers: Answer[];
  refusals: RefusalCode[];
  /**
   * 'transaction': the endpoint wraps the service in one write transaction together with the remembered answer.
   * 'service': the service remembers it itself (it awaits workers or the network in between).
   * Absent: the `Idempotency-Key` header is ignored.
   */
  idempotency?: 'transaction' | 'service';
}

/** Identity that keeps literal types: `export const launchJob = contract({ … })`. */
export const contract = <const C extends Contract>(value: C): C => value;
