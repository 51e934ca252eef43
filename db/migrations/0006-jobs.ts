/** Quotes, jobs, charge segments, points, batches. */
import type { Migration } from '../migrate.ts';

const integer = (name: string): string =>
  `${name} INTEGER NOT NULL CHECK (typeof(${name}) = 'integer' AND ${name} BETWEEN 0 AND 9007199254740991)`;
const states = (...names: string[]): string => names.map((name) => `'${name}'`).join(', ');

export const jobs: Migration = {
  name: '0006-jobs',
  statements: [
    // What pilots found, by model version and the inputs that shape a replicate.
    `CREATE TABLE pilots (
      cacheKey TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      userId TEXT NOT NULL REFERENCES users (id),
      modelVersionId TEXT NOT NULL REFERENCES modelVersions (id),
      ${integer('replicates')},
      ${integer('cutReplicates')},
      ${integer('events')},
      mean REAL NOT NULL,
      sd REAL NOT NULL,
      seconds REAL NOT NULL,
      secondsPerReplicate REAL NOT NULL,
      kernel TEXT NOT NULL,
      engineVersion TEXT NOT NULL,
      createdAt TEXT NOT NULL
    )`,
    // Every pilot that ran, for the limit per member and hour.
    `CREATE TABLE pilotRuns (
      id TEXT PRIMARY KEY,
      userId TEXT NOT NULL REFERENCES users (id),
      createdAt TEXT NOT NULL
    )`,
    `CREATE INDEX pilotRunsByUser ON pilotRuns (userId, createdAt)`,
    `CREATE TABLE quotes (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      userId TEXT NOT NULL REFERENCES users (id),
      modelVersionId TEXT NOT NULL REFERENCES modelVersions (id),
      inputs TEXT NOT NULL CHECK (json_valid(inputs)),
      answer TEXT NOT NULL CHECK (json_valid(answer)),
      priceBookId TEXT NOT NULL,
      ${integer('microcreditsPerMillionEvents')},
      ${integer('expectedMicrocredits')},
      ${integer('highMicrocredits')},
      ${integer('leastCapMicrocredits')},
      eventsPerReplicate REAL NOT NULL,
      secondsPerReplicate REAL NOT NULL,
      createdAt TEXT NOT NULL,
      expiresAt TEXT NOT NULL,
      usedByJobId TEXT
    )`,
    `CREATE INDEX quotesByTeam ON quotes (teamId, id)`,
    `CREATE TABLE jobs (
      id TEXT PRIMARY KEY,
      teamId TEXT NOT NULL REFERENCES teams (id),
      userId TEXT NOT NULL REFERENCES users (id),
      modelId TEXT NOT NULL REFERENCES models (id),
      modelVersionId TEXT NOT NULL REFERENCES modelVersions (id),
      projectCodeId TEXT,
      name TEXT NOT NULL,
      state TEXT NOT NULL CHECK (state IN (${states('queued', 'running', 'done', 'stopped_at_cap', 'cancelled', 'failed')})),
      ending TEXT CHECK (ending IS NULL OR json_valid(ending)),
      lane TEXT NOT NULL CHECK (lane IN (${states('steady', 'express', 'overnight')})),
      inputs TEXT NOT NULL CHECK (json_valid(inputs)),
      seed TEXT NOT NULL,
      kernel TEXT,
      engineVersion TEXT NOT NULL,
      ${integer('replicatesPlanned')},
      ${integer('replicatesDone')},
      ${integer('events')},
      ${integer('expectedMicrocredits')},
      ${integer('chargedMicrocredits')},
      ${integer('heldMicrocredits')},
      ${integer('capMicrocredits')},
      secondsPerReplicate REAL NOT NULL,
      resultsDigest TEXT,
      prefixSha256 TEXT,
      archiveSha256 TEXT,
      archiveBytes INTEGER,
      archiveRevision INTEGER NOT NULL DEFAULT 0,
      createdAt TEXT NOT NULL,
      startedAt TEXT,
      finishedAt TEXT,
      CHECK (chargedMicrocredits + heldMicrocredits <= capMicrocredits),
      CHECK (replicatesDone <= replicatesPlanned)
    )`,
    `CREATE INDEX jobsByTeam ON jobs (teamId, id)`,
    `CREATE INDEX jobsOpen ON jobs (state) WHERE state IN ('queued', 'running')`,
    // One price, hold and cap each: the launch, then every extension.
    `CREATE TABLE segments (
      id TEXT PRIMARY KEY,
      jobId TEXT NOT NULL REFERENCES jobs (id),
      ordinal INTEGER NOT NULL,
      quoteId TEXT NOT NULL UNIQUE REFERENCES quotes (id),
      userId TEXT NOT NULL REFERENCES users (id),
      priceBookId TEXT NOT NULL,
      ${integer('microcreditsPerMillionEvents')},
      ${integer('firstReplicate')},
      ${integer('replicateCount')},
      ${integer('capMicrocredits')},
      ${integer('events')},
      ${integer('chargedMicrocredits')},
      releasedAt TEXT,
      CHECK (chargedMicrocredits <= capMicrocredits),
      UNIQUE (jobId, ordinal)
    )`,
    // planned -> done (computed, file stored) -> joined (part of the complete prefix, charged) | discarded.
    `CREATE TABLE batches (
      id TEXT PRIMARY KEY,
      jobId TEXT NOT NULL REFERENCES jobs (id),
      segmentId TEXT NOT NULL REFERENCES segments (id),
      ordinal INTEGER NOT NULL,
      point INTEGER NOT NULL,
      ${integer('firstReplicate')},
      ${integer('replicateCount')},
      state TEXT NOT NULL CHECK (state IN (${states('planned', 'done', 'joined', 'discarded')})),
      attempts INTEGER NOT NULL DEFAULT 0,
      ${integer('completeReplicates')},
      ${integer('events')},
      ${integer('absorbedEvents')},
      failure TEXT CHECK (failure IS NULL OR json_valid(failure)),
      seconds REAL NOT NULL DEFAULT 0,
      file TEXT,
      fileSha256 TEXT,
      doneAt TEXT,
      UNIQUE (jobId, ordinal)
    )`,
    `CREATE INDEX batchesByState ON batches (jobId, state, ordinal)`,
  ],
};
