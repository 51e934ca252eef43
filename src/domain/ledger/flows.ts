/** The postings of each flow of credits: the one place that says which accounts move. Each sums to zero per team. */
import type { Account, Posting } from './accounts.ts';

const move = (teamId: string, from: Account, to: Account, amountMicrocredits: number): Posting[] => {
  if (!Number.isSafeInteger(amountMicrocredits) || amountMicrocredits < 0)
    throw new Error(`${amountMicrocredits} is not an amount of microcredits.`);
  if (amountMicrocredits === 0) return [];
  return [
    { teamId, account: from, amountMicrocredits: -amountMicrocredits },
    { teamId, account: to, amountMicrocredits },
  ];
};

type Flow = (teamId: string, amountMicrocredits: number) => Posting[];

export const flows = {
  grant: (teamId, amount) => move(teamId, 'granted', 'available', amount),
  topUp: (teamId, amount) => move(teamId, 'bought', 'available', amount),
  royalty: (teamId, amount) => move(teamId, 'earned', 'available', amount),
  hold: (teamId, amount) => move(teamId, 'available', 'held', amount),
  release: (teamId, amount) => move(teamId, 'held', 'available', amount),
  settle: (teamId, amount) => move(teamId, 'held', 'spent', amount),
  refund: (teamId, amount) => move(teamId, 'available', 'returned', amount),
  disputeOpened: (teamId, amount) => move(teamId, 'available', 'frozen', amount),
  disputeWon: (teamId, amount) => move(teamId, 'frozen', 'available', amount),
  disputeLost: (teamId, amount) => move(teamId, 'frozen', 'returned', amount),
} as const satisfies Record<string, Flow>;
