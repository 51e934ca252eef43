/** Colours of the figures: the interface's tokens, and six series colours that stay apart for colour-blind readers. */

/** Everything that a figure takes from the page around it. The browser fills one from CSS variables, the server takes a constant. */
export interface ChartTheme {
  paper: string;
  panel: string;
  glass: string;
  rule: string;
  ink: string;
  soft: string;
  /** The ensemble's curves. */
  bromo: string;
  /** The mean field's curve, and warnings. */
  methyl: string;
  malachite: string;
  phenol: string;
  congo: string;
  /** Categorical colours, in order of use; dash patterns repeat the distinction without colour. */
  series: readonly string[];
  fontFamily: string;
}

/** Least CIE 1976 distance between any two series colours, in full colour vision and in three simulated deficiencies. */
export const leastSeriesDistance = 20;

const fontFamily = 'Manrope, system-ui, sans-serif';

export const lightTheme: ChartTheme = {
  paper: '#F2F6F8',
  panel: '#FCFDFE',
  glass: '#DCE8EE',
  rule: '#CBD7DE',
  ink: '#13212B',
  soft: '#4B5C69',
  bromo: '#1D5C9E',
  methyl: '#A34E00',
  malachite: '#0B7050',
  phenol: '#B8105A',
  congo: '#9C1B1F',
  series: ['#1D5C9E', '#A34E00', '#06351F', '#87506F', '#310A52', '#808B52'],
  fontFamily,
};

export const darkTheme: ChartTheme = {
  paper: '#0D1418',
  panel: '#131D23',
  glass: '#1A262D',
  rule: '#2A3943',
  ink: '#E8F0F3',
  soft: '#9FB1BC',
  bromo: '#74B4F4',
  methyl: '#F0A35A',
  malachite: '#55C79C',
  phenol: '#FF6FA8',
  congo: '#FF8A84',
  series: ['#74B4F4', '#F0A35A', '#CDF7DA', '#BE4A94', '#6F66DC', '#827245'],
  fontFamily,
};

/** Dash patterns beside the series colours. */
export const seriesDashes = ['solid', [7, 3], [2, 3], [10, 3, 2, 3], [5, 5], [1, 2]] as const;
