/** Replays the ledger from its transactions alone and names the first thing that does not follow. */
import type { Account, Posting } from './accounts.ts';
import { holdingAccounts, sourceAccounts } from './accounts.ts';
import { canonicalText, genesisHash, type CanonicalTransaction } from './canonical-transaction.ts';
import type { LotDraw, LotIssue } from './lots.ts';

/** The rows that were made from one transaction, as the database has them. */
export interface DerivedRows {
  postings: { teamId: string; account: string; amountMicrocredits: number; balanceMicrocredits: number }[];
  lots: { id: string; teamId: string; creditsMicrocredits: number; netMinor: number }[];
  draws: {
    lotId: string;
    amountMicrocredits: number;
    remainingMicrocredits: number;
    frozenMicrocredits: number;
  }[];
}

/** Where a replay may begin instead of at the first transaction: what the rows said then. */
export interface ReplayStart {
  sequence: number;
  hash: string;
  balances: { teamId: string; account: string; balanceMicrocredits: number }[];
  lots: { id: string; teamId: string; remainingMicrocredits: number; frozenMicrocredits: number }[];
  segments: { segmentId: string; teamId: string; jobId: string | null; held: number; spent: number }[];
}

export type ReplayRow = CanonicalTransaction & { hash: string };

interface LotState {
  teamId: string;
  remaining: number;
  frozen: number;
}

/** Memory grows with teams, lots and segments, not with transactions. */
export class LedgerReplay {
  #sequence = 0;
  #hash = genesisHash;
  readonly #balances = new Map<string, number>();
  readonly #lots = new Map<string, LotState>();
  readonly #segments = new Map<string, { held: number; spent: number; owner: string }>();
  readonly #touched = new Set<string>();
  readonly #hashOf: (text: string) => string;

  constructor(hashOf: (text: string) => string, start?: ReplayStart) {
    this.#hashOf = hashOf;
    if (!start) return;
    this.#sequence = start.sequence;
    this.#hash = start.hash;
    for (const { teamId, account, balanceMicrocredits } of start.balances)
      this.#balances.set(`${teamId} ${account}`, balanceMicrocredits);
    for (const { id, teamId, remainingMicrocredits: remaining, frozenMicrocredits: frozen } of start.lots)
      this.#lots.set(id, { teamId, remaining, frozen });
    for (const { segmentId, teamId, jobId, held, spent } of start.segments)
      this.#segments.set(segmentId, { held, spent, owner: `${teamId} ${jobId}` });
  }

  get head(): { sequence: number; hash: string } {
    return { sequence: this.#sequence, hash: this.#hash };
  }

  /** Takes the next transaction; answers what is wrong with it, or null. After a fault the replay is of no further use. */
  take(row: ReplayRow, derived: DerivedRows): string | null {
    return (
      this.#checkChain(row) ??
      this.#checkPostings(row, derived) ??
      this.#checkLots(row, derived) ??
      this.#checkSegment(row) ??
      this.#checkTeams()
    );
  }

  #checkChain(row: ReplayRow): string | null {
    if (row.sequence !== this.#sequence + 1) return `transaction ${this.#sequence + 1} is missing`;
    if (row.previousHash !== this.#hash) return 'its previous hash is not the hash of the transaction before it';
    if (this.#hashOf(canonicalText(row)) !== row.hash) return 'its hash does not fit its content';
    this.#sequence = row.sequence;
    this.#hash = row.hash;
    return null;
  }

  #checkPostings(row: ReplayRow, derived: DerivedRows): string | null {
    const postings = JSON.parse(row.postings) as Posting[];
    if (postings.length !== derived.postings.length) return 'its posting rows are not those it states';
    const sums = new Map<string, number>();
    this.#touched.clear();
    for (const { teamId, account, amountMicrocredits } of postings) {
      if (!Number.isSafeInteger(amountMicrocredits)) return 'an amount is not a whole number within range';
      sums.set(teamId, (sums.get(teamId) ?? 0) + amountMicrocredits);
      this.#touched.add(teamId);
      const balance = this.#balance(teamId, account) + amountMicrocredits;
      this.#balances.set(`${teamId} ${account}`, balance);
      if ((holdingAccounts as readonly Account[]).includes(account) && balance < 0)
        return `${account} of ${teamId} falls below zero`;
      if ((sourceAccounts as readonly Account[]).includes(account) && balance > 0)
        return `${account} of ${teamId} rises above zero`;
      const stored = derived.postings.find((posting) => posting.teamId === teamId && posting.account === account);
      if (stored?.amountMicrocredits !== amountMicrocredits) return `the posting row of ${account} has another amount`;
      if (stored.balanceMicrocredits !== balance) return `the posting row of ${account} has another balance`;
    }
    for (const [teamId, sum] of sums) if (sum !== 0) return `the postings of ${teamId} do not sum to zero`;
    return null;
  }

  #checkLots(row: ReplayRow, derived: DerivedRows): string | null {
    const issues = JSON.parse(row.lots) as LotIssue[];
    const draws = JSON.parse(row.draws) as LotDraw[];
    if (issues.length !== derived.lots.length || draws.length !== derived.draws.length)
      return 'its lot or draw rows are not those it states';
    for (const { id, teamId, creditsMicrocredits, netMinor } of issues) {
      const stored = derived.lots.find((lot) => lot.id === id);
      if (
        stored?.creditsMicrocredits !== creditsMicrocredits ||
        stored.netMinor !== netMinor ||
        stored.teamId !== teamId
      )
        return `the row of lot ${id} differs`;
      this.#lots.set(id, { teamId, remaining: creditsMicrocredits, frozen: 0 });
      this.#touched.add(teamId);
    }
    for (const draw of draws) {
      const lot = this.#lots.get(draw.lotId);
      if (!lot || lot.teamId !== draw.teamId) return `lot ${draw.lotId} is not one of ${draw.teamId}`;
      lot.remaining -= draw.amountMicrocredits;
      lot.frozen += draw.frozenChangeMicrocredits;
      if (draw.amountMicrocredits < 0 || lot.frozen < 0 || lot.frozen > lot.remaining)
        return `lot ${draw.lotId} is drawn beyond what it holds`;
      const stored = derived.draws.find(({ lotId }) => lotId === draw.lotId);
      if (
        stored?.amountMicrocredits !== draw.amountMicrocredits ||
        stored.remainingMicrocredits !== lot.remaining ||
        stored.frozenMicrocredits !== lot.frozen
      )
        return `the draw row of lot ${draw.lotId} differs`;
    }
    return null;
  }

  #checkSegment(row: ReplayRow): string | null {
    if (!row.segmentId) return null;
    const owner = `${row.teamId} ${row.jobId}`;
    const segment = this.#segments.get(row.segmentId) ?? { held: 0, spent: 0, owner };
    for (const { account, amountMicrocredits } of JSON.parse(row.postings) as Posting[]) {
      if (account === 'held') segment.held += amountMicrocredits;
      if (account === 'spent') segment.spent += amountMicrocredits;
    }
    this.#segments.set(row.segmentId, segment);
    if (segment.owner !== owner) return `segment ${row.segmentId} belongs to another job`;
    if (segment.held !== row.segmentHeldMicrocredits || segment.spent !== row.segmentSpentMicrocredits)
      return `the running totals of segment ${row.segmentId} do not follow`;
    return null;
  }

  /** After each transaction, for the teams it touched: the sources equal the holdings, and the lots the unspent ones. */
  #checkTeams(): string | null {
    for (const teamId of this.#touched) {
      const of = (account: Account) => this.#balance(teamId, account);
      const holdings = holdingAccounts.reduce((sum, account) => sum + of(account), 0);
      const sources = sourceAccounts.reduce((sum, account) => sum + of(account), 0);
      if (holdings + sources !== 0) return `what ${teamId} has is not what it received`;
    }
    return null;
  }

  /** At the end: held equals the open holds, and the lots what is unspent, for every team. Answers the first fault or null. */
  finish(): string | null {
    const lots = new Map<string, { remaining: number; frozen: number }>();
    for (const { teamId, remaining, frozen } of this.#lots.values()) {
      const sum = lots.get(teamId) ?? { remaining: 0, frozen: 0 };
      lots.set(teamId, { remaining: sum.remaining + remaining, frozen: sum.frozen + frozen });
    }
    const held = new Map<string, number>();
    for (const { held: amount, owner } of this.#segments.values()) {
      const teamId = owner.split(' ')[0] ?? '';
      held.set(teamId, (held.get(teamId) ?? 0) + amount);
    }
    const teams = new Set([...this.#balances.keys()].map((key) => key.split(' ')[0] ?? ''));
    for (const teamId of teams) {
      const of = (account: Account) => this.#balance(teamId, account);
      const { remaining, frozen } = lots.get(teamId) ?? { remaining: 0, frozen: 0 };
      if (remaining !== of('available') + of('held') + of('frozen'))
        return `the lots of ${teamId} do not hold what its accounts do`;
      if (frozen !== of('frozen')) return `the frozen parts of the lots of ${teamId} are not what is frozen`;
      if ((held.get(teamId) ?? 0) !== of('held')) return `held of ${teamId} is not the sum of its open holds`;
    }
    return null;
  }

  #balance(teamId: string, account: Account): number {
    return this.#balances.get(`${teamId} ${account}`) ?? 0;
  }
}
