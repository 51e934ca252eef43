/** Every maximum of the system in one place, with the relations between them asserted at the end. */

export const limits = {
  /** Networks. */
  speciesPerNetwork: 5_000,
  reactionsPerNetwork: 20_000,
  parametersPerNetwork: 20_000,
  expressionCharacters: 4_000,
  expressionDepth: 100,
  stoichiometry: 1_000,
  changesPerNetwork: 1_000,
  /** Of all timed changes of a network together. */
  changeTimes: 10_000,
  /** Triggered changes that may happen one after the other at one moment. */
  changeCascade: 1_000,
  initialCount: 2 ** 31 - 1,
  identifierCharacters: 100,
  nameCharacters: 200,
  /** Requests. */
  bodyBytes: 1_000_000,
  modelBodyBytes: 10_000_000,
  xmlDepth: 200,
  idempotencyKeyCharacters: 200,
  listPage: 200,
  listPageDefault: 50,
  /** People. */
  passwordCharactersMinimum: 12,
  passwordCharacters: 200,
  linkHours: 24,
  resetMinutes: 60,
  invitationDays: 7,
  sessionDays: 30,
  sessionIdleDays: 14,
  membersPerTeam: 200,
  openInvitationsPerTeam: 100,
  tokensPerMember: 50,
  tokenDays: 3_650,
  projectCodesPerTeam: 1_000,
  /** Jobs. */
  replicatesPerJob: 10_000_000,
  gridIntervals: 10_000,
  /** Grid points × observables × points of a job. */
  resultCells: 2_000_000,
  keptTraces: 1_000,
  /** First passages noted by a job; a kernel has a bit for each. */
  passagesPerJob: 20,
  /** Observables whose covariances a job notes, and pairs × grid points × points of them. */
  correlatedObservables: 20,
  correlationCells: 50_000,
  sweepPoints: 1_000,
  /** Points of a sweep × reactions of its network. */
  sweepReactions: 200_000,
  capReplicatesMinimum: 30,
  eventsPerReplicate: 2 ** 40,
  batchesPerJob: 20_000,
  openJobsPerTeam: 50,
  /** Pilots. */
  pilotReplicatesMinimum: 200,
  pilotEvents: 20_000_000,
  pilotSeconds: 20,
  pilotsPerMemberAndHour: 240,
  quoteMinutes: 60,
  /** Finance. */
  invoicesPerZip: 500,
  messagesPerInvoice: 200,
  /** Webhooks. */
  webhooksPerTeam: 20,
  webhookUrlCharacters: 2_000,
  webhookLogDays: 30,
  /** Money: every integer of credits or money stays within this. */
  integer: Number.MAX_SAFE_INTEGER,
} as const;

const relations: [string, boolean][] = [
  ['a page fits its maximum', limits.listPageDefault <= limits.listPage],
  ['a model body is at least an ordinary body', limits.modelBodyBytes >= limits.bodyBytes],
  ['an idle session ends before the longest one', limits.sessionIdleDays <= limits.sessionDays],
  ['replicates are below the stream key limit of 2^40', limits.replicatesPerJob < 2 ** 40],
  ['a kernel has a bit for each passage', limits.passagesPerJob < 31],
  ['points are below the stream key limit of 2^24', limits.sweepPoints < 2 ** 24],
  ['the least pilot can support the least cap', limits.pilotReplicatesMinimum >= limits.capReplicatesMinimum],
];
for (const [relation, holds] of relations) if (!holds) throw new Error(`limits.ts: ${relation} does not hold`);
