/** Rows of pilots, quotes, jobs, charge segments and batches. */
import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import type { BatchFailure, JobEnding, JobInputs } from '@/domain/jobs/job-inputs.ts';
import type { HorizonMean } from '@/domain/jobs/method-comparison.ts';
import type { JobState } from '@/domain/jobs/job-state.ts';
import type { Lane } from '@/domain/pricing/price-book.ts';
import { column } from './columns.ts';

export class Pilot extends Model<InferAttributes<Pilot>, InferCreationAttributes<Pilot>> {
  /** SHA-256 over engine version, model version and the inputs that shape a replicate. */
  declare cacheKey: string;
  declare teamId: string;
  declare userId: string;
  declare modelVersionId: string;
  declare replicates: number;
  declare cutReplicates: number;
  declare events: number;
  /** Events per replicate. */
  declare mean: number;
  declare sd: number;
  declare seconds: number;
  declare secondsPerReplicate: number;
  declare kernel: string;
  /** Means and sds at the horizon; null of pilots that ran before they were kept. */
  declare atHorizon: CreationOptional<HorizonMean[] | null>;
  declare engineVersion: string;
  declare createdAt: string;
}

export class PilotRun extends Model<InferAttributes<PilotRun>, InferCreationAttributes<PilotRun>> {
  declare id: string;
  declare userId: string;
  declare createdAt: string;
}

export class Quote extends Model<InferAttributes<Quote>, InferCreationAttributes<Quote>> {
  declare id: string;
  declare teamId: string;
  declare userId: string;
  declare modelVersionId: string;
  declare inputs: JobInputs;
  /** The document given to the caller, without id, expiry and use. */
  declare answer: unknown;
  declare priceBookId: string;
  declare microcreditsPerMillionEvents: number;
  declare expectedMicrocredits: number;
  declare highMicrocredits: number;
  declare leastCapMicrocredits: number;
  declare eventsPerReplicate: number;
  declare secondsPerReplicate: number;
  declare createdAt: string;
  declare expiresAt: string;
  declare usedByJobId: CreationOptional<string | null>;
}

export class Job extends Model<InferAttributes<Job>, InferCreationAttributes<Job>> {
  declare id: string;
  declare teamId: string;
  declare userId: string;
  declare modelId: string;
  declare modelVersionId: string;
  declare projectCodeId: CreationOptional<string | null>;
  declare name: string;
  declare state: JobState;
  /** How it will end, once that is settled and while results are being written; then what it ended with. */
  declare ending: CreationOptional<JobEnding | null>;
  declare lane: Lane;
  declare inputs: JobInputs;
  declare seed: string;
  declare kernel: CreationOptional<string | null>;
  declare engineVersion: string;
  declare replicatesPlanned: number;
  /** The complete prefix. */
  declare replicatesDone: number;
  declare events: number;
  declare expectedMicrocredits: number;
  declare chargedMicrocredits: number;
  declare heldMicrocredits: number;
  /** Sum over segments. */
  declare capMicrocredits: number;
  declare secondsPerReplicate: number;
  declare resultsDigest: CreationOptional<string | null>;
  /** Of the file that holds the whole prefix of the newest revision. */
  declare prefixSha256: CreationOptional<string | null>;
  declare archiveSha256: CreationOptional<string | null>;
  declare archiveBytes: CreationOptional<number | null>;
  declare archiveRevision: CreationOptional<number>;
  declare createdAt: string;
  declare startedAt: CreationOptional<string | null>;
  declare finishedAt: CreationOptional<string | null>;
}

export class Segment extends Model<InferAttributes<Segment>, InferCreationAttributes<Segment>> {
  declare id: string;
  declare jobId: string;
  declare ordinal: number;
  declare quoteId: string;
  declare userId: string;
  /** Of the token it was launched with; null: by a person at a browser. */
  declare tokenId: CreationOptional<string | null>;
  declare priceBookId: string;
  declare microcreditsPerMillionEvents: number;
  declare firstReplicate: number;
  declare replicateCount: number;
  declare capMicrocredits: number;
  /** Of the delivered replicates of this segment. */
  declare events: number;
  declare chargedMicrocredits: number;
  declare releasedAt: CreationOptional<string | null>;
}

export type BatchState = 'planned' | 'done' | 'joined' | 'discarded';

export class Batch extends Model<InferAttributes<Batch>, InferCreationAttributes<Batch>> {
  declare id: string;
  declare jobId: string;
  declare segmentId: string;
  declare ordinal: number;
  declare point: number;
  declare firstReplicate: number;
  /** Planned. */
  declare replicateCount: number;
  declare state: BatchState;
  declare attempts: CreationOptional<number>;
  /** Complete replicates in the file; of a joined batch: delivered. */
  declare completeReplicates: number;
  /** Events of those replicates. */
  declare events: number;
  /** Computed, not delivered, not charged. */
  declare absorbedEvents: number;
  declare failure: CreationOptional<BatchFailure | null>;
  declare seconds: number;
  /** Name inside the job's folder. */
  declare file: CreationOptional<string | null>;
  declare fileSha256: CreationOptional<string | null>;
  declare doneAt: CreationOptional<string | null>;
}

export function defineJobs(sequelize: Sequelize): void {
  const withoutTimestamps = { sequelize, timestamps: false };
  Pilot.init(
    {
      cacheKey: column.id(),
      teamId: column.text(),
      userId: column.text(),
      modelVersionId: column.text(),
      replicates: column.integer(),
      cutReplicates: column.integer(),
      events: column.integer(),
      mean: column.real(),
      sd: column.real(),
      seconds: column.real(),
      secondsPerReplicate: column.real(),
      kernel: column.text(),
      atHorizon: column.optionalJson<HorizonMean[]>('atHorizon'),
      engineVersion: column.text(),
      createdAt: column.text(),
    },
    { ...withoutTimestamps, tableName: 'pilots' },
  );
  PilotRun.init(
    { id: column.id(), userId: column.text(), createdAt: column.text() },
    { ...withoutTimestamps, tableName: 'pilotRuns' },
  );
  Quote.init(
    {
      id: column.id(),
      teamId: column.text(),
      userId: column.text(),
      modelVersionId: column.text(),
      inputs: column.json('inputs'),
      answer: column.json('answer'),
      priceBookId: column.text(),
      microcreditsPerMillionEvents: column.integer(),
      expectedMicrocredits: column.integer(),
      highMicrocredits: column.integer(),
      leastCapMicrocredits: column.integer(),
      eventsPerReplicate: column.real(),
      secondsPerReplicate: column.real(),
      createdAt: column.text(),
      expiresAt: column.text(),
      usedByJobId: column.optionalText(),
    },
    { ...withoutTimestamps, tableName: 'quotes' },
  );
  Job.init(
    {
      id: column.id(),
      teamId: column.text(),
      userId: column.text(),
      modelId: column.text(),
      modelVersionId: column.text(),
      projectCodeId: column.optionalText(),
      name: column.text(),
      state: column.text(),
      ending: column.optionalJson('ending'),
      lane: column.text(),
      inputs: column.json('inputs'),
      seed: column.text(),
      kernel: column.optionalText(),
      engineVersion: column.text(),
      replicatesPlanned: column.integer(),
      replicatesDone: column.integer(),
      events: column.integer(),
      expectedMicrocredits: column.integer(),
      chargedMicrocredits: column.integer(),
      heldMicrocredits: column.integer(),
      capMicrocredits: column.integer(),
      secondsPerReplicate: column.real(),
      resultsDigest: column.optionalText(),
      prefixSha256: column.optionalText(),
      archiveSha256: column.optionalText(),
      archiveBytes: column.optionalInteger(),
      archiveRevision: { ...column.integer(), defaultValue: 0 },
      createdAt: column.text(),
      startedAt: column.optionalText(),
      finishedAt: column.optionalText(),
    },
    { ...withoutTimestamps, tableName: 'jobs' },
  );
  Segment.init(
    {
      id: column.id(),
      jobId: column.text(),
      ordinal: column.integer(),
      quoteId: column.text(),
      userId: column.text(),
      tokenId: column.optionalText(),
      priceBookId: column.text(),
      microcreditsPerMillionEvents: column.integer(),
      firstReplicate: column.integer(),
      replicateCount: column.integer(),
      capMicrocredits: column.integer(),
      events: column.integer(),
      chargedMicrocredits: column.integer(),
      releasedAt: column.optionalText(),
    },
    { ...withoutTimestamps, tableName: 'segments' },
  );
  Batch.init(
    {
      id: column.id(),
      jobId: column.text(),
      segmentId: column.text(),
      ordinal: column.integer(),
      point: column.integer(),
      firstReplicate: column.integer(),
      replicateCount: column.integer(),
      state: column.text(),
      attempts: { ...column.integer(), defaultValue: 0 },
      completeReplicates: column.integer(),
      events: column.integer(),
      absorbedEvents: column.integer(),
      failure: column.optionalJson('failure'),
      seconds: { ...column.real(), defaultValue: 0 },
      file: column.optionalText(),
      fileSha256: column.optionalText(),
      doneAt: column.optionalText(),
    },
    { ...withoutTimestamps, tableName: 'batches' },
  );
}
