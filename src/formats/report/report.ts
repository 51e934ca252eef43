/** What a report says, as plain data. */
export interface Report {
  title: string;
  /** Under the title: what this is. */
  subtitle: string;
  /** RFC 3339: the only date in the file. */
  date: string;
  facts: { label: string; value: string }[];
  /** Set apart above the facts, such as the label of an approximate method; none for the exact one. */
  notices: string[];
  table: { caption: string; columns: string[]; rows: string[][]; note: string | null };
  figures: { svg: string; caption: string }[];
  caution: string;
}
