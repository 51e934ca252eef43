/** Who may do what: one typed table that the server enforces and the interface reads. */

export const roles = ['owner', 'finance', 'modeller', 'viewer'] as const;
export type Role = (typeof roles)[number];

/** Also the scopes of API tokens: a token may do what its scopes name and its person's roles allow. */
export const permissions = [
  'team:read',
  'team:manage',
  'models:read',
  'models:write',
  'jobs:read',
  'jobs:launch',
  'results:read',
  'credits:read',
  'billing:read',
  'billing:write',
] as const;
export type Permission = (typeof permissions)[number];

const reading: Permission[] = ['team:read', 'models:read', 'jobs:read', 'results:read', 'credits:read'];

/** owner ⊃ everything; finance: money, no launching; modeller: models and jobs; viewer: reads models and results. */
export const permissionsOfRole: Record<Role, readonly Permission[]> = {
  owner: permissions,
  finance: ['team:read', 'jobs:read', 'results:read', 'models:read', 'credits:read', 'billing:read', 'billing:write'],
  modeller: [...reading, 'models:write', 'jobs:launch'],
  viewer: reading,
};

export const mayDo = (held: readonly Role[], permission: Permission): boolean =>
  held.some((role) => permissionsOfRole[role].includes(permission));

export const isRole = (value: unknown): value is Role => roles.includes(value as Role);
