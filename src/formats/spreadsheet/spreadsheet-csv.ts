/**
 * CSV that a spreadsheet opens without running anything in it. A spreadsheet takes a cell that begins with = + − @, a tab
 * or a carriage return for a formula; such text gets an apostrophe before it (common practice against formula injection).
 * Figures are numbers or `figure(…)` and stay figures, negative ones included.
 */
import { stringify } from 'csv-stringify/sync';

/** A decimal figure with all its digits; a plain number has as many as it needs. */
class Figure {
  constructor(readonly text: string) {}
}
export type SpreadsheetCell = string | number | null | Figure;

/** Throws unless the text is a plain decimal number. */
export function figure(text: string): Figure {
  if (!/^-?\d+(\.\d+)?$/.test(text)) throw new Error(`“${text}” is not a figure.`);
  return new Figure(text);
}

/** An integer of units of 10^−decimals as a decimal figure: (−1500000, 6) is −1.500000. */
export function scaledFigure(amount: number, decimals: number): Figure {
  const digits = String(Math.abs(amount)).padStart(decimals + 1, '0');
  const cut = digits.length - decimals;
  return figure(`${amount < 0 ? '-' : ''}${digits.slice(0, cut)}${decimals > 0 ? `.${digits.slice(cut)}` : ''}`);
}

/** Also the full-width forms, which some spreadsheets treat alike. */
const looksLikeFormula = /^[=+\-@\t\r＝＋－＠]/;

function safeCell(cell: SpreadsheetCell): string {
  if (cell === null) return '';
  if (cell instanceof Figure) return cell.text;
  if (typeof cell === 'number') return String(cell);
  return looksLikeFormula.test(cell) ? `'${cell}` : cell;
}

/** Lines with RFC 4180 quoting and line ends. */
export const spreadsheetCsv = (rows: readonly (readonly SpreadsheetCell[])[]): string =>
  stringify(
    rows.map((row) => row.map(safeCell)),
    { record_delimiter: 'windows' },
  );
