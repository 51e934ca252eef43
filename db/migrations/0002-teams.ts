/** Project codes and the mail outbox. */
import type { Migration } from '../migrate.ts';

export const teams: Migration = {
  name: '0002-teams',
  statements: [
    `CREATE TABLE projectCodes (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      code TEXT NOT NULL COLLATE NOCASE,
      client TEXT,
      poNumber TEXT,
      createdAt TEXT NOT NULL,
      closedAt TEXT,
      UNIQUE (teamId, code)
    )`,
    // The text of a mail may hold a one-time link, so it is erased once the mail is sent; the rest stays as a record.
    `CREATE TABLE mails (
      id TEXT PRIMARY KEY,
      messageKey TEXT NOT NULL UNIQUE,
      recipient TEXT NOT NULL,
      subject TEXT NOT NULL,
      text TEXT,
      html TEXT,
      attachments TEXT CHECK (attachments IS NULL OR json_valid(attachments)),
      state TEXT NOT NULL CHECK (state IN ('queued', 'sent', 'failed')),
      attempts INTEGER NOT NULL DEFAULT 0 CHECK (attempts >= 0),
      lastError TEXT,
      createdAt TEXT NOT NULL,
      nextAttemptAt TEXT,
      sentAt TEXT,
      CHECK ((state = 'queued') = (nextAttemptAt IS NOT NULL)),
      CHECK ((state = 'sent') = (sentAt IS NOT NULL))
    )`,
    `CREATE INDEX mailsDue ON mails (nextAttemptAt) WHERE state = 'queued'`,
  ],
};
