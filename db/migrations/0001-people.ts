/** Users, teams, memberships, sessions, one-time links, API tokens, idempotency keys. */
import type { Migration } from '../migrate.ts';

/** Times are RFC 3339 UTC text with milliseconds, so that they sort and compare as text. */
export const people: Migration = {
  name: '0001-people',
  statements: [
    `CREATE TABLE users (
      id TEXT PRIMARY KEY,
      email TEXT NOT NULL UNIQUE CHECK (email = lower(email)),
      name TEXT NOT NULL,
      passwordHash TEXT,
      emailVerifiedAt TEXT,
      operator INTEGER NOT NULL DEFAULT 0 CHECK (operator IN (0, 1)),
      createdAt TEXT NOT NULL
    )`,
    `CREATE TABLE teams (
      id TEXT PRIMARY KEY,
      slug TEXT NOT NULL UNIQUE,
      name TEXT NOT NULL,
      timeZone TEXT NOT NULL DEFAULT 'UTC',
      suspendedAt TEXT,
      suspensionReason TEXT,
      createdAt TEXT NOT NULL
    )`,
    `CREATE TABLE memberships (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      userId TEXT NOT NULL REFERENCES users (id),
      roles TEXT NOT NULL CHECK (json_valid(roles)),
      createdAt TEXT NOT NULL,
      removedAt TEXT
    )`,
    `CREATE UNIQUE INDEX membershipsPresent ON memberships (teamId, userId) WHERE removedAt IS NULL`,
    `CREATE TABLE sessions (
      id TEXT PRIMARY KEY,
      userId TEXT NOT NULL REFERENCES users (id),
      expiresAt TEXT NOT NULL,
      createdAt TEXT NOT NULL,
      reauthenticatedAt TEXT NOT NULL,
      userAgent TEXT,
      address TEXT
    )`,
    `CREATE INDEX sessionsByUser ON sessions (userId)`,
    `CREATE TABLE oneTimeLinks (
      id TEXT PRIMARY KEY,
      tokenHash TEXT NOT NULL UNIQUE,
      purpose TEXT NOT NULL CHECK (purpose IN ('verify', 'reset', 'invitation')),
      userId TEXT REFERENCES users (id),
      teamId TEXT REFERENCES teams (id),
      email TEXT NOT NULL,
      roles TEXT CHECK (roles IS NULL OR json_valid(roles)),
      details TEXT CHECK (details IS NULL OR json_valid(details)),
      invitedBy TEXT REFERENCES users (id),
      createdAt TEXT NOT NULL,
      expiresAt TEXT NOT NULL,
      usedAt TEXT,
      revokedAt TEXT
    )`,
    `CREATE INDEX oneTimeLinksByTeam ON oneTimeLinks (teamId) WHERE teamId IS NOT NULL`,
    `CREATE INDEX oneTimeLinksByEmail ON oneTimeLinks (email, purpose)`,
    `CREATE TABLE apiTokens (
      id TEXT PRIMARY KEY,
      tokenHash TEXT NOT NULL UNIQUE,
      name TEXT NOT NULL,
      userId TEXT NOT NULL REFERENCES users (id),
      teamId TEXT NOT NULL REFERENCES teams (id),
      scopes TEXT NOT NULL CHECK (json_valid(scopes)),
      createdAt TEXT NOT NULL,
      expiresAt TEXT,
      lastUsedAt TEXT,
      revokedAt TEXT
    )`,
    `CREATE INDEX apiTokensByTeam ON apiTokens (teamId)`,
    `CREATE TABLE idempotencyKeys (
      scope TEXT NOT NULL,
      idempotencyKey TEXT NOT NULL,
      bodyHash TEXT NOT NULL,
      answer TEXT NOT NULL CHECK (json_valid(answer)),
      createdAt TEXT NOT NULL,
      PRIMARY KEY (scope, idempotencyKey)
    )`,
  ],
};
