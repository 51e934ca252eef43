/** Models and their immutable versions. */
import type { Migration } from '../migrate.ts';

export const models: Migration = {
  name: '0005-models',
  statements: [
    `CREATE TABLE models (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      name TEXT NOT NULL,
      createdBy TEXT REFERENCES users (id),
      createdAt TEXT NOT NULL,
      archivedAt TEXT
    )`,
    `CREATE INDEX modelsByTeam ON models (teamId, id)`,
    `CREATE TABLE modelVersions (
      id TEXT PRIMARY KEY,
      modelId TEXT NOT NULL REFERENCES models (id),
      teamId TEXT NOT NULL REFERENCES teams (id),
      number INTEGER NOT NULL CHECK (number >= 1),
      contentHash TEXT NOT NULL,
      document TEXT NOT NULL CHECK (json_valid(document)),
      note TEXT NOT NULL,
      createdBy TEXT REFERENCES users (id),
      createdAt TEXT NOT NULL,
      UNIQUE (modelId, number)
    )`,
    `CREATE TRIGGER modelVersionsAreImmutable BEFORE UPDATE ON modelVersions
      BEGIN SELECT RAISE(ABORT, 'model versions are immutable'); END`,
    `CREATE TRIGGER modelVersionsStay BEFORE DELETE ON modelVersions
      BEGIN SELECT RAISE(ABORT, 'model versions are kept'); END`,
  ],
};
