/** Outgoing webhooks: where a team's events go, and each delivery with its attempts. */
import type { Migration } from '../migrate.ts';

export const webhooks: Migration = {
  name: '0020-webhooks',
  statements: [
    `CREATE TABLE webhooks (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      createdBy TEXT NOT NULL REFERENCES users (id),
      url TEXT NOT NULL,
      kinds TEXT NOT NULL CHECK (json_valid(kinds)),
      sealedSecret TEXT NOT NULL,
      createdAt TEXT NOT NULL,
      pausedAt TEXT,
      removedAt TEXT
    )`,
    `CREATE INDEX webhooksByTeam ON webhooks (teamId) WHERE removedAt IS NULL`,
    // One occasion reaches an endpoint once, however often the code that tells of it runs.
    `CREATE TABLE webhookDeliveries (
      id TEXT PRIMARY KEY,
      webhookId TEXT NOT NULL REFERENCES webhooks (id),
      occasion TEXT NOT NULL,
      kind TEXT NOT NULL,
      body TEXT NOT NULL CHECK (json_valid(body)),
      state TEXT NOT NULL CHECK (state IN ('queued', 'delivered', 'failed')),
      attempts INTEGER NOT NULL DEFAULT 0 CHECK (attempts >= 0),
      createdAt TEXT NOT NULL,
      nextAttemptAt TEXT,
      lastAttemptAt TEXT,
      lastStatus INTEGER,
      lastFault TEXT,
      UNIQUE (webhookId, occasion),
      CHECK ((state = 'queued') = (nextAttemptAt IS NOT NULL))
    )`,
    `CREATE INDEX webhookDeliveriesDue ON webhookDeliveries (nextAttemptAt) WHERE state = 'queued'`,
  ],
};
