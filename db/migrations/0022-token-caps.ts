/** What a token may spend in all, and which token opened a segment. */
import type { Migration } from '../migrate.ts';

export const tokenCaps: Migration = {
  name: '0022-token-caps',
  statements: [
    `ALTER TABLE apiTokens ADD COLUMN capMicrocredits INTEGER CHECK (capMicrocredits IS NULL OR capMicrocredits > 0)`,
    `ALTER TABLE segments ADD COLUMN tokenId TEXT REFERENCES apiTokens (id)`,
    `CREATE INDEX segmentsByToken ON segments (tokenId) WHERE tokenId IS NOT NULL`,
  ],
};
