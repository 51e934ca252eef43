/** The accounts of a team and the signs they must keep. */

/** Holdings never fall below zero. `frozen` waits for a dispute to be decided. */
export const holdingAccounts = ['available', 'held', 'frozen', 'spent', 'returned'] as const;
/** Sources never rise above zero: what they lack is what the team has received. */
export const sourceAccounts = ['bought', 'granted', 'earned'] as const;
export const accounts = [...holdingAccounts, ...sourceAccounts] as const;

export type Account = (typeof accounts)[number];

export interface Posting {
  teamId: string;
  account: Account;
  /** Non-zero, signed. */
  amountMicrocredits: number;
}

export type Balances = Record<Account, number>;

export const emptyBalances = (): Balances => Object.fromEntries(accounts.map((account) => [account, 0])) as Balances;

/** What a transaction may be. The names are stored, so they are never renamed. */
export const transactionKinds = [
  'grant',
  'top_up',
  'hold',
  'release',
  'settlement',
  'refund',
  'dispute_opened',
  'dispute_won',
  'dispute_lost',
] as const;
export type TransactionKind = (typeof transactionKinds)[number];
