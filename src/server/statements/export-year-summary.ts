/** The statements of a year as rows for a spreadsheet. */
import type { StatementFigures } from '@/contracts/statements.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { scaledFigure, spreadsheetCsv } from '@/formats/spreadsheet/spreadsheet-csv.ts';
import { readYearSummary } from './read-year-summary.ts';

const columns: [string, keyof StatementFigures][] = [
  ['opening', 'openingMicrocredits'],
  ['bought', 'boughtMicrocredits'],
  ['granted', 'grantedMicrocredits'],
  ['earned', 'earnedMicrocredits'],
  ['spent', 'spentMicrocredits'],
  ['refunded', 'refundedMicrocredits'],
  ['taken back', 'takenBackMicrocredits'],
  ['closing', 'closingMicrocredits'],
];

/** In credits. */
export async function exportYearSummary(options: {
  actor: Actor;
  team: string;
  year?: number | undefined;
}): Promise<Result<{ filename: string; pieces: string[] }>> {
  const read = await readYearSummary(options);
  if (!read.ok) return read;
  const { year, months, total } = read.value.summary;
  const row = (name: string, figures: StatementFigures) => [
    name,
    ...columns.map(([, key]) => scaledFigure(figures[key], 6)),
  ];
  return accept({
    filename: `summary-${options.team}-${year}.csv`,
    pieces: [
      spreadsheetCsv([
        ['month', ...columns.map(([name]) => name)],
        ...months.map((figures) => row(figures.month, figures)),
        row(String(year), total),
      ]),
    ],
  });
}
