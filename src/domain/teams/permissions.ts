/** Who may do what: one typed table that the server enforces and the interface reads. */

export const roles = ['owner', 'finance', 'modeller', 'viewer'] as const;
export type Role = (typeof roles)[number];

/** A permission that ends in `:read` changes nothing and stays open to a suspended team. */
export const permissions = [
  'team:read',
  'team:manage',
  'tokens:manage',
  'membership:leave',
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

/** What needs a person at a browser: a token that leaked must not make members or further tokens. */
const personal = ['team:manage', 'tokens:manage', 'membership:leave'] as const;
type Personal = (typeof personal)[number];
export type TokenScope = Exclude<Permission, Personal>;

/** Scopes of API tokens: a token may do what its scopes name and its person's roles allow. */
export const tokenScopes = permissions.filter(
  (permission): permission is TokenScope => !personal.includes(permission as Personal),
);

const everybody: Permission[] = [
  'team:read',
  'tokens:manage',
  'membership:leave',
  'models:read',
  'jobs:read',
  'results:read',
  'credits:read',
];

/** owner ⊃ everything; finance: money, no launching; modeller: models and jobs; viewer: reads models and results. */
export const permissionsOfRole: Record<Role, readonly Permission[]> = {
  owner: permissions,
  finance: [...everybody, 'billing:read', 'billing:write'],
  modeller: [...everybody, 'models:write', 'jobs:launch'],
  viewer: everybody,
};

export const mayDo = (held: readonly Role[], permission: Permission): boolean =>
  held.some((role) => permissionsOfRole[role].includes(permission));

/** Everything that a set of roles allows, in the order of the table. */
export const permissionsOf = (held: readonly Role[]): Permission[] =>
  permissions.filter((permission) => mayDo(held, permission));

export const isRole = (value: unknown): value is Role => roles.includes(value as Role);
