/** Teams, members, invitations, project codes, API tokens. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { permissions, roles, tokenScopes } from '@/domain/teams/permissions.ts';
import { emailAddress, lineOfText, membershipSummary } from './auth.ts';
import { contract } from './contract.ts';

const role = z.enum(roles);
/** A membership has at least one role; each counts once. */
const roleSet = z
  .array(role)
  .min(1, 'At least one role.')
  .max(roles.length)
  .transform((held) => roles.filter((one) => held.includes(one)));

const page = z.object({
  limit: z.coerce.number().int().min(1).max(limits.listPage).default(limits.listPageDefault),
  cursor: z.string().max(100).optional(),
});
const nextCursor = z.string().nullable();

const reading = ['not_signed_in', 'not_found', 'forbidden', 'invalid_input'] as const;
const writing = [...reading, 'team_suspended', 'origin_refused'] as const;

export const teamDocument = z.object({
  id: z.string(),
  slug: z.string(),
  name: z.string(),
  timeZone: z.string(),
  suspendedAt: z.string().nullable(),
  suspensionReason: z.string().nullable(),
  createdAt: z.string(),
  /** What the asking person holds here; for a token, cut down to its scopes. */
  roles: z.array(role),
  permissions: z.array(z.enum(permissions)),
});

export const memberDocument = z.object({
  id: z.string(),
  userId: z.string(),
  name: z.string(),
  email: z.string(),
  roles: z.array(role),
  joinedAt: z.string(),
});

export const invitationDocument = z.object({
  id: z.string(),
  email: z.string(),
  roles: z.array(role),
  invitedBy: z.string(),
  createdAt: z.string(),
  expiresAt: z.string(),
  expired: z.boolean(),
});

export const projectCodeDocument = z.object({
  id: z.string(),
  code: z.string(),
  client: z.string().nullable(),
  poNumber: z.string().nullable(),
  closedAt: z.string().nullable(),
  createdAt: z.string(),
});

export const tokenDocument = z.object({
  id: z.string(),
  name: z.string(),
  person: z.object({ id: z.string(), name: z.string() }),
  scopes: z.array(z.enum(tokenScopes)),
  /** What its launches may spend and hold in all; null: no cap of its own. */
  capMicrocredits: z.number().int().nullable(),
  /** What they have spent and hold. */
  usedMicrocredits: z.number().int(),
  createdAt: z.string(),
  expiresAt: z.string().nullable(),
  lastUsedAt: z.string().nullable(),
  revokedAt: z.string().nullable(),
});

export const listTeams = contract({
  id: 'listTeams',
  feature: 'teams',
  method: 'GET',
  path: '/api/v1/teams',
  summary: 'Teams that the person signed in belongs to',
  access: { kind: 'signedIn' },
  answers: [
    {
      status: 200,
      description: 'All of them',
      schema: z.object({ teams: z.array(membershipSummary), nextCursor: z.null() }),
    },
  ],
  refusals: ['not_signed_in', 'forbidden'],
});

export const readTeam = contract({
  id: 'readTeam',
  feature: 'teams',
  method: 'GET',
  path: '/api/v1/teams/{team}',
  summary: 'A team and what the asker may do in it',
  access: { kind: 'team', permission: 'team:read' },
  answers: [{ status: 200, description: 'The team', schema: z.object({ team: teamDocument }) }],
  refusals: [...reading],
});

export const changeTeam = contract({
  id: 'changeTeam',
  feature: 'teams',
  method: 'PATCH',
  path: '/api/v1/teams/{team}',
  summary: 'Change the team’s name or time zone',
  access: { kind: 'team', permission: 'team:manage' },
  body: z.strictObject({ name: lineOfText(80).optional(), timeZone: z.string().max(64).optional() }),
  answers: [{ status: 200, description: 'The team', schema: z.object({ team: teamDocument }) }],
  refusals: [...writing],
});

export const listMembers = contract({
  id: 'listMembers',
  feature: 'teams',
  method: 'GET',
  path: '/api/v1/teams/{team}/members',
  summary: 'Members, longest-standing first',
  access: { kind: 'team', permission: 'team:read' },
  query: page,
  answers: [
    { status: 200, description: 'One page', schema: z.object({ members: z.array(memberDocument), nextCursor }) },
  ],
  refusals: [...reading],
});

export const changeMember = contract({
  id: 'changeMember',
  feature: 'teams',
  method: 'PATCH',
  path: '/api/v1/teams/{team}/members/{member}',
  summary: 'Change a member’s roles; the last owner stays one',
  access: { kind: 'team', permission: 'team:manage' },
  body: z.strictObject({ roles: roleSet }),
  answers: [{ status: 200, description: 'The member', schema: z.object({ member: memberDocument }) }],
  refusals: [...writing, 'last_owner'],
});

export const removeMember = contract({
  id: 'removeMember',
  feature: 'teams',
  method: 'DELETE',
  path: '/api/v1/teams/{team}/members/{member}',
  summary: 'Remove a member: their tokens end, their work stays; the last owner cannot be removed',
  access: { kind: 'team', permission: 'team:manage' },
  answers: [{ status: 204, description: 'Removed' }],
  refusals: [...writing, 'last_owner'],
});

export const leaveTeam = contract({
  id: 'leaveTeam',
  feature: 'teams',
  method: 'POST',
  path: '/api/v1/teams/{team}/leave',
  summary: 'Leave the team oneself; the last owner cannot',
  access: { kind: 'team', permission: 'membership:leave' },
  answers: [{ status: 204, description: 'Left' }],
  refusals: [...writing, 'last_owner'],
});

export const listInvitations = contract({
  id: 'listInvitations',
  feature: 'teams',
  method: 'GET',
  path: '/api/v1/teams/{team}/invitations',
  summary: 'Invitations not yet accepted or revoked, newest first',
  access: { kind: 'team', permission: 'team:manage' },
  query: page,
  answers: [
    {
      status: 200,
      description: 'One page',
      schema: z.object({ invitations: z.array(invitationDocument), nextCursor }),
    },
  ],
  refusals: [...reading],
});

export const inviteMember = contract({
  id: 'inviteMember',
  feature: 'teams',
  method: 'POST',
  path: '/api/v1/teams/{team}/invitations',
  summary: 'Invite by e-mail; a second invitation of the same address replaces the first',
  access: { kind: 'team', permission: 'team:manage' },
  body: z.strictObject({ email: emailAddress, roles: roleSet }),
  answers: [
    { status: 201, description: 'Invited; the mail is queued', schema: z.object({ invitation: invitationDocument }) },
  ],
  refusals: [...writing, 'already_a_member', 'limit_reached', 'idempotency_key_reused'],
  idempotency: 'transaction',
});

export const resendInvitation = contract({
  id: 'resendInvitation',
  feature: 'teams',
  method: 'POST',
  path: '/api/v1/teams/{team}/invitations/{invitation}/resend',
  summary: 'Send the invitation again with a new link; the old link ends',
  access: { kind: 'team', permission: 'team:manage' },
  answers: [{ status: 200, description: 'Queued', schema: z.object({ invitation: invitationDocument }) }],
  refusals: [...writing, 'rate_limited'],
});

export const revokeInvitation = contract({
  id: 'revokeInvitation',
  feature: 'teams',
  method: 'DELETE',
  path: '/api/v1/teams/{team}/invitations/{invitation}',
  summary: 'Withdraw an invitation',
  access: { kind: 'team', permission: 'team:manage' },
  answers: [{ status: 204, description: 'Withdrawn' }],
  refusals: [...writing],
});

const code = z
  .string()
  .trim()
  .min(1)
  .max(40)
  .regex(
    /^[A-Za-z0-9][A-Za-z0-9._/-]*$/,
    'Letters, digits, dot, dash, slash and underscore, starting with a letter or digit.',
  );
const client = lineOfText();
const poNumber = lineOfText(100);

export const listProjectCodes = contract({
  id: 'listProjectCodes',
  feature: 'teams',
  method: 'GET',
  path: '/api/v1/teams/{team}/project-codes',
  summary: 'Project codes that jobs can be booked to, newest first',
  access: { kind: 'team', permission: 'team:read' },
  query: page,
  answers: [
    {
      status: 200,
      description: 'One page',
      schema: z.object({ projectCodes: z.array(projectCodeDocument), nextCursor }),
    },
  ],
  refusals: [...reading],
});

export const createProjectCode = contract({
  id: 'createProjectCode',
  feature: 'teams',
  method: 'POST',
  path: '/api/v1/teams/{team}/project-codes',
  summary: 'Create a project code: where the cost of jobs is booked',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.strictObject({ code, client: client.optional(), poNumber: poNumber.optional() }),
  answers: [{ status: 201, description: 'Created', schema: z.object({ projectCode: projectCodeDocument }) }],
  refusals: [...writing, 'limit_reached', 'idempotency_key_reused'],
  idempotency: 'transaction',
});

export const changeProjectCode = contract({
  id: 'changeProjectCode',
  feature: 'teams',
  method: 'PATCH',
  path: '/api/v1/teams/{team}/project-codes/{projectCode}',
  summary: 'Close or reopen a project code, or change its client or PO number; jobs already booked keep it',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.strictObject({
    client: client.nullable().optional(),
    poNumber: poNumber.nullable().optional(),
    closed: z.boolean().optional(),
  }),
  answers: [{ status: 200, description: 'The code', schema: z.object({ projectCode: projectCodeDocument }) }],
  refusals: [...writing],
});

export const listTokens = contract({
  id: 'listTokens',
  feature: 'teams',
  method: 'GET',
  path: '/api/v1/teams/{team}/tokens',
  summary: 'API tokens: one’s own; an owner sees everybody’s. Never the token itself',
  access: { kind: 'team', permission: 'tokens:manage' },
  query: page,
  answers: [{ status: 200, description: 'One page', schema: z.object({ tokens: z.array(tokenDocument), nextCursor }) }],
  refusals: [...reading],
});

export const createToken = contract({
  id: 'createToken',
  feature: 'teams',
  method: 'POST',
  path: '/api/v1/teams/{team}/tokens',
  summary: 'Create an API token; `secret` is shown this once',
  access: { kind: 'team', permission: 'tokens:manage' },
  body: z.strictObject({
    name: lineOfText(80),
    scopes: z
      .array(z.enum(tokenScopes))
      .min(1, 'At least one scope.')
      .max(tokenScopes.length)
      .transform((held) => tokenScopes.filter((one) => held.includes(one))),
    /** Null: until it is revoked. */
    expiresInDays: z.number().int().min(1).max(limits.tokenDays).nullable().default(90),
    /** What launches with the token may spend and hold in all. Null: only what bounds its person. */
    capMicrocredits: z.number().int().min(1).max(limits.integer).nullable().default(null),
  }),
  answers: [
    {
      status: 201,
      description: 'Created; the secret cannot be shown again',
      schema: z.object({ token: tokenDocument, secret: z.string() }),
    },
  ],
  refusals: [...writing, 'limit_reached'],
});

export const revokeToken = contract({
  id: 'revokeToken',
  feature: 'teams',
  method: 'DELETE',
  path: '/api/v1/teams/{team}/tokens/{token}',
  summary: 'Revoke an API token at once: one’s own, or as an owner anybody’s',
  access: { kind: 'team', permission: 'tokens:manage' },
  answers: [{ status: 204, description: 'Revoked' }],
  refusals: [...writing],
});

export const teamContracts = [
  listTeams,
  readTeam,
  changeTeam,
  listMembers,
  changeMember,
  removeMember,
  leaveTeam,
  listInvitations,
  inviteMember,
  resendInvitation,
  revokeInvitation,
  listProjectCodes,
  createProjectCode,
  changeProjectCode,
  listTokens,
  createToken,
  revokeToken,
];
