/** Formula injection: the characters are those that OWASP's page on CSV injection lists (from memory), and their full-width forms. */
import { describe, expect, it } from 'vitest';
import { figure, scaledFigure, spreadsheetCsv } from './spreadsheet-csv.ts';

describe('spreadsheetCsv', () => {
  it.each(['=1+1', '+1', '-1', '@SUM(A1)', '\t=1', '\r=1', '＝1', '－1', '=cmd|" /c calc"!A0'])(
    'makes the text %j no formula',
    (text) => {
      const cell = spreadsheetCsv([[text]]).trim();
      const content = cell.startsWith('"') ? cell.slice(1, -1).replaceAll('""', '"') : cell;
      expect(content).toBe(`'${text}`.trim());
    },
  );

  it('leaves other text and figures as they are, quotes as RFC 4180 says, and ends lines with CRLF', () => {
    expect(spreadsheetCsv([['a "b", c', 'x=1', -3, scaledFigure(-1_500_000, 6), null, figure('0.10')]])).toBe(
      '"a ""b"", c",x=1,-3,-1.500000,,0.10\r\n',
    );
  });

  it('prints scaled figures with every digit', () => {
    expect([0, 1, -1, 1_000_000, 12_345_678].map((amount) => scaledFigure(amount, 6).text)).toEqual([
      '0.000000',
      '0.000001',
      '-0.000001',
      '1.000000',
      '12.345678',
    ]);
    expect(scaledFigure(250, 0).text).toBe('250');
    expect(() => figure('1+1')).toThrow(/not a figure/);
  });
});
