/** Rows of users, teams, memberships, sessions, one-time links, API tokens and idempotency keys. */
import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { Role, TokenScope } from '@/domain/teams/permissions.ts';
import { column } from './columns.ts';

export class User extends Model<InferAttributes<User>, InferCreationAttributes<User>> {
  declare id: string;
  declare email: string;
  declare name: string;
  declare passwordHash: CreationOptional<string | null>;
  declare emailVerifiedAt: CreationOptional<string | null>;
  declare operator: CreationOptional<boolean>;
  declare createdAt: string;
}

export class Team extends Model<InferAttributes<Team>, InferCreationAttributes<Team>> {
  declare id: string;
  declare slug: string;
  declare name: string;
  declare timeZone: CreationOptional<string>;
  declare suspendedAt: CreationOptional<string | null>;
  declare suspensionReason: CreationOptional<string | null>;
  declare createdAt: string;
}

export class Membership extends Model<InferAttributes<Membership>, InferCreationAttributes<Membership>> {
  declare id: string;
  declare teamId: string;
  declare userId: string;
  declare roles: Role[];
  declare createdAt: string;
  declare removedAt: CreationOptional<string | null>;
}

export class Session extends Model<InferAttributes<Session>, InferCreationAttributes<Session>> {
  /** SHA-256 of the session id in the cookie. */
  declare id: string;
  declare userId: string;
  declare expiresAt: string;
  declare createdAt: string;
  declare reauthenticatedAt: string;
  declare userAgent: CreationOptional<string | null>;
  declare address: CreationOptional<string | null>;
}

export interface SignUpDetails {
  name: string;
  teamName: string;
  passwordHash: string;
}

export class OneTimeLink extends Model<InferAttributes<OneTimeLink>, InferCreationAttributes<OneTimeLink>> {
  declare id: string;
  declare tokenHash: string;
  declare purpose: 'verify' | 'reset' | 'invitation';
  declare userId: CreationOptional<string | null>;
  declare teamId: CreationOptional<string | null>;
  declare email: string;
  declare roles: CreationOptional<Role[] | null>;
  /** A sign-up's wishes until the address is verified; erased when the link is used. */
  declare details: CreationOptional<SignUpDetails | null>;
  declare invitedBy: CreationOptional<string | null>;
  declare createdAt: string;
  declare expiresAt: string;
  declare usedAt: CreationOptional<string | null>;
  declare revokedAt: CreationOptional<string | null>;
}

export class ApiToken extends Model<InferAttributes<ApiToken>, InferCreationAttributes<ApiToken>> {
  declare id: string;
  declare tokenHash: string;
  declare name: string;
  declare userId: string;
  declare teamId: string;
  declare scopes: TokenScope[];
  /** What launches with it may spend and hold in all; null: no cap of its own. */
  declare capMicrocredits: CreationOptional<number | null>;
  declare createdAt: string;
  declare expiresAt: CreationOptional<string | null>;
  declare lastUsedAt: CreationOptional<string | null>;
  declare revokedAt: CreationOptional<string | null>;
}

export class IdempotencyKey extends Model<InferAttributes<IdempotencyKey>, InferCreationAttributes<IdempotencyKey>> {
  /** principal | team | route */
  declare scope: string;
  declare idempotencyKey: string;
  declare bodyHash: string;
  declare answer: unknown;
  declare createdAt: string;
}

export function definePeople(sequelize: Sequelize): void {
  User.init(
    {
      id: column.id(),
      email: column.text(),
      name: column.text(),
      passwordHash: column.optionalText(),
      emailVerifiedAt: column.optionalText(),
      operator: { type: DataTypes.BOOLEAN, allowNull: false, defaultValue: false },
      createdAt: column.text(),
    },
    { sequelize, tableName: 'users', timestamps: false },
  );
  Team.init(
    {
      id: column.id(),
      slug: column.text(),
      name: column.text(),
      timeZone: { ...column.text(), defaultValue: 'UTC' },
      suspendedAt: column.optionalText(),
      suspensionReason: column.optionalText(),
      createdAt: column.text(),
    },
    { sequelize, tableName: 'teams', timestamps: false },
  );
  Membership.init(
    {
      id: column.id(),
      teamId: column.text(),
      userId: column.text(),
      roles: column.json<Role[]>('roles'),
      createdAt: column.text(),
      removedAt: column.optionalText(),
    },
    { sequelize, tableName: 'memberships', timestamps: false },
  );
  Session.init(
    {
      id: column.id(),
      userId: column.text(),
      expiresAt: column.text(),
      createdAt: column.text(),
      reauthenticatedAt: column.text(),
      userAgent: column.optionalText(),
      address: column.optionalText(),
    },
    { sequelize, tableName: 'sessions', timestamps: false },
  );
  OneTimeLink.init(
    {
      id: column.id(),
      tokenHash: column.text(),
      purpose: column.text(),
      userId: column.optionalText(),
      teamId: column.optionalText(),
      email: column.text(),
      roles: column.optionalJson('roles'),
      details: column.optionalJson('details'),
      invitedBy: column.optionalText(),
      createdAt: column.text(),
      expiresAt: column.text(),
      usedAt: column.optionalText(),
      revokedAt: column.optionalText(),
    },
    { sequelize, tableName: 'oneTimeLinks', timestamps: false },
  );
  ApiToken.init(
    {
      id: column.id(),
      tokenHash: column.text(),
      name: column.text(),
      userId: column.text(),
      teamId: column.text(),
      scopes: column.json('scopes'),
      capMicrocredits: column.optionalInteger(),
      createdAt: column.text(),
      expiresAt: column.optionalText(),
      lastUsedAt: column.optionalText(),
      revokedAt: column.optionalText(),
    },
    { sequelize, tableName: 'apiTokens', timestamps: false },
  );
  IdempotencyKey.init(
    {
      scope: { ...column.text(), primaryKey: true },
      idempotencyKey: { ...column.text(), primaryKey: true },
      bodyHash: column.text(),
      answer: column.json('answer'),
      createdAt: column.text(),
    },
    { sequelize, tableName: 'idempotencyKeys', timestamps: false },
  );
}
