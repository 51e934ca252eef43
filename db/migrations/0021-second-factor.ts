/** Second factors: the sealed secret of one-time codes, and the recovery codes that stand in for a lost device. */
import type { Migration } from '../migrate.ts';

export const secondFactor: Migration = {
  name: '0021-second-factor',
  statements: [
    // `lastStep` is the time step of the last code accepted: no code works twice.
    `CREATE TABLE secondFactors (
      userId TEXT PRIMARY KEY REFERENCES users (id),
      sealedSecret TEXT NOT NULL,
      createdAt TEXT NOT NULL,
      confirmedAt TEXT,
      lastStep INTEGER NOT NULL DEFAULT 0
    )`,
    `CREATE TABLE recoveryCodes (
      codeHash TEXT PRIMARY KEY,
      userId TEXT NOT NULL REFERENCES users (id),
      usedAt TEXT
    )`,
    `CREATE INDEX recoveryCodesByUser ON recoveryCodes (userId)`,
  ],
};
