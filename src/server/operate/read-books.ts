/** Our books over all teams: credits owed, revenue as it is earned, credits returned, absorbed work, tax. */
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import type { Books } from '@/contracts/operate.ts';
import { percentText } from '@/domain/billing/decide-tax.ts';
import { earnedByMonth, sumMoney, type LotMonth, type MonthMoney } from '@/domain/billing/earned-by-month.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { requireOperator } from './require-operator.ts';

const select = <T extends object>(sql: string) => database().query<T>(sql, { type: QueryTypes.SELECT });

/** A credit note takes back. */
const signed = (column: string) => `CASE kind WHEN 'credit_note' THEN -${column} ELSE ${column} END`;

export async function readBooks(options: { actor: Actor }): Promise<Result<{ books: Books }>> {
  const operator = requireOperator(options.actor);
  if (!operator.ok) return operator;
  const [lots, drawn, flows, absorbed, invoiced, taxes, disputes, receivables] = await Promise.all([
    readLots(),
    select<LotMonth>(
      `SELECT lots.id AS lotId, substr(occurredAt, 1, 7) AS month, sum(lotDraws.amountMicrocredits) AS drawnMicrocredits,
         lots.netMinor, lots.currency, lots.creditsMicrocredits
       FROM lots JOIN lotDraws ON lotDraws.lotId = lots.id
       JOIN ledgerTransactions AS own ON own.sequence = lotDraws.transactionSequence
       WHERE own.kind = 'settlement' AND lots.netMinor > 0 GROUP BY lots.id, month ORDER BY lots.id, month`,
    ),
    select<{ month: string; account: string; amount: number }>(
      `SELECT substr(occurredAt, 1, 7) AS month, account, sum(amountMicrocredits) AS amount
       FROM ledgerPostings JOIN ledgerTransactions ON sequence = transactionSequence
       WHERE account IN ('spent', 'returned') GROUP BY month, account`,
    ),
    select<{ month: string; events: number; microcredits: number }>(
      `SELECT substr(coalesce(doneAt, jobs.createdAt), 1, 7) AS month, sum(absorbedEvents) AS events,
         sum(absorbedEvents * segments.microcreditsPerMillionEvents / 1000000) AS microcredits
       FROM batches JOIN segments ON segments.id = batches.segmentId JOIN jobs ON jobs.id = batches.jobId
       WHERE absorbedEvents > 0 GROUP BY month`,
    ),
    select<MonthMoney>(
      `SELECT substr(issuedAt, 1, 7) AS month, currency, sum(${signed('netMinor')}) AS amountMinor
       FROM invoices GROUP BY month, currency ORDER BY currency`,
    ),
    select<{
      month: string;
      country: string;
      category: string;
      rate: number;
      currency: string;
      base: number;
      tax: number;
    }>(
      `SELECT substr(taxPoint, 1, 7) AS month, buyer ->> 'country' AS country, item.value ->> 'category' AS category,
         item.value ->> 'rateHundredths' AS rate, currency,
         sum(${signed(`(item.value ->> 'baseMinor')`)}) AS base, sum(${signed(`(item.value ->> 'taxMinor')`)}) AS tax
       FROM invoices, json_each(taxes) AS item GROUP BY 1, 2, 3, 4, 5 ORDER BY 1 DESC, 2, 3`,
    ),
    select<StateMoney>(
      `SELECT state, currency, sum(totalMinor) AS amountMinor FROM disputes GROUP BY state, currency ORDER BY currency`,
    ),
    select<StateMoney>(
      `SELECT state, currency, sum(totalMinor) AS amountMinor FROM receivables GROUP BY state, currency ORDER BY currency`,
    ),
  ]);
  const earned = earnedByMonth(drawn);
  const months = [...new Set([...earned, ...flows, ...absorbed, ...invoiced].map(({ month }) => month))]
    .sort()
    .reverse();
  const flowOf = (month: string, account: string) =>
    flows.find((flow) => flow.month === month && flow.account === account)?.amount ?? 0;
  const money = ({ amountMinor, currency }: { amountMinor: number; currency: string }) => ({ amountMinor, currency });
  return accept({
    books: {
      owed: owedOf(lots, invoiced, earned),
      disputes: {
        open: disputes.filter(({ state }) => state === 'open').map(money),
        owed: receivables.filter(({ state }) => state === 'open').map(money),
        writtenOff: receivables.filter(({ state }) => state === 'written_off').map(money),
      },
      months: months.map((month) => {
        const lost = absorbed.find((each) => each.month === month);
        return {
          month,
          earned: earned.filter((each) => each.month === month).map(money),
          invoiced: invoiced.filter((each) => each.month === month).map(money),
          returnedMicrocredits: flowOf(month, 'returned'),
          spentMicrocredits: flowOf(month, 'spent'),
          absorbedEvents: String(lost?.events ?? 0),
          absorbedMicrocredits: lost?.microcredits ?? 0,
        };
      }),
      taxes: taxes.map(({ month, country, category, rate, currency, base, tax }) => ({
        month,
        country,
        category,
        ratePercent: percentText(rate),
        base: { amountMinor: base, currency },
        tax: { amountMinor: tax, currency },
      })),
    },
  });
}

interface StateMoney {
  state: string;
  currency: string;
  amountMinor: number;
}

interface LotSum {
  source: 'grant' | 'royalty' | 'bought';
  remaining: number;
}

/** What is left of lots, by where they came from. */
const readLots = (): Promise<LotSum[]> =>
  select<LotSum>(
    `SELECT source, sum(coalesce(
       (SELECT remainingMicrocredits FROM lotDraws WHERE lotId = lots.id ORDER BY transactionSequence DESC LIMIT 1),
       creditsMicrocredits)) AS remaining
     FROM lots GROUP BY source`,
  );

/** What was invoiced, less credit notes, and is not earned: every bought lot has its invoice, every refund its credit note. */
function owedOf(lots: LotSum[], invoiced: MonthMoney[], earned: MonthMoney[]): Books['owed'] {
  const remaining = (wanted: LotSum['source']) => lots.find(({ source }) => source === wanted)?.remaining ?? 0;
  return {
    boughtMicrocredits: remaining('bought'),
    grantedMicrocredits: remaining('grant'),
    earnedMicrocredits: remaining('royalty'),
    unearned: sumMoney([
      ...invoiced,
      ...earned.map(({ currency, amountMinor }) => ({ currency, amountMinor: -amountMinor })),
    ]),
  };
}
