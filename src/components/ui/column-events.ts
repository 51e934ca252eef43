/** How an island tells the graduated column what to show: window events, so that neither knows the other. */

export interface QuoteOnScreen {
  expectedMicrocredits: number;
  highMicrocredits: number;
}

export const quoteEvent = 'burette:quote';
export const balanceEvent = 'burette:balance';

/** Kept for a column that comes to life after the quote was given. */
let onScreen: QuoteOnScreen | null = null;
export const quoteOnScreen = (): QuoteOnScreen | null => onScreen;

/** Moves the pink meniscus to where the level would be after this quote; null takes it away. */
export function announceQuote(quote: QuoteOnScreen | null): void {
  onScreen = quote;
  window.dispatchEvent(new CustomEvent<QuoteOnScreen | null>(quoteEvent, { detail: quote }));
}

/** Credits were held, charged, released or bought: the column reads the balance again. */
export function announceBalanceChange(): void {
  window.dispatchEvent(new Event(balanceEvent));
}
