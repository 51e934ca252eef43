/** The data behind a figure as one table: for readers who cannot see the figure, and for its CSV. */

export interface FigureTable {
  caption: string;
  columns: string[];
  rows: (number | string)[][];
}
