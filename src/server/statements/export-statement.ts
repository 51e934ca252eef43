/** The lines of a statement as rows for a spreadsheet, with opening and closing balance around them. */
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { limits } from '@/domain/limits.ts';
import { scaledFigure, spreadsheetCsv, type SpreadsheetCell } from '@/formats/spreadsheet/spreadsheet-csv.ts';
import { listStatementLines } from './list-statement-lines.ts';
import { readStatement } from './read-statement.ts';

const credits = (microcredits: number) => scaledFigure(microcredits, 6);

const columns = ['line', 'date', 'project code', 'member', 'lane', 'job', 'job id', 'charges', 'credits'];

/** Sums of the last column: the lines from the opening balance on add up to the closing one. */
export async function exportStatement(options: {
  actor: Actor;
  team: string;
  month?: string | undefined;
}): Promise<Result<{ filename: string; pieces: AsyncIterable<string> }>> {
  const read = await readStatement(options);
  if (!read.ok) return read;
  const { statement } = read.value;
  const flow = (words: string, date: string, amount: number): SpreadsheetCell[] => [
    words,
    date.slice(0, 10),
    ...Array<null>(6).fill(null),
    credits(amount),
  ];
  async function* pieces(): AsyncIterable<string> {
    yield spreadsheetCsv([
      columns,
      flow('Opening balance', statement.startsAt, statement.openingMicrocredits),
      flow('Bought', statement.endsAt, statement.boughtMicrocredits),
      flow('Granted', statement.endsAt, statement.grantedMicrocredits),
      flow('Earned', statement.endsAt, statement.earnedMicrocredits),
      flow('Refunded', statement.endsAt, -statement.refundedMicrocredits),
      flow('Taken back after a dispute', statement.endsAt, -statement.takenBackMicrocredits),
    ]);
    let cursor: string | null | undefined;
    do {
      const page = await listStatementLines({
        ...options,
        month: statement.month,
        limit: limits.listPage,
        ...(cursor ? { cursor } : {}),
      });
      if (!page.ok) throw new Error(`The lines of ${statement.month} ended early: ${page.detail}`);
      yield spreadsheetCsv(
        page.value.lines.map((line) => [
          line.extension === 0 ? 'Spent' : `Spent, extension ${line.extension}`,
          line.lastChargedAt.slice(0, 10),
          line.projectCode,
          line.member,
          line.lane,
          line.jobName,
          line.jobId,
          line.charges,
          credits(-line.spentMicrocredits),
        ]),
      );
      cursor = page.value.nextCursor;
    } while (cursor);
    yield spreadsheetCsv([flow('Closing balance', statement.endsAt, statement.closingMicrocredits)]);
  }
  return accept({ filename: `statement-${options.team}-${statement.month}.csv`, pieces: pieces() });
}
