/** What the graduated column says to somebody who does not see it. */
import { creditsText } from './amounts-text.ts';
import type { QuoteOnScreen } from './column-events.ts';

export interface ColumnLevels {
  availableMicrocredits: number;
  heldMicrocredits: number;
  quote?: QuoteOnScreen | null | undefined;
  /** What a member may still spend this month out of the team's credits. */
  shareLeftMicrocredits?: number | null | undefined;
}

export function columnWords({
  availableMicrocredits,
  heldMicrocredits,
  quote,
  shareLeftMicrocredits,
}: ColumnLevels): string {
  const parts = [`${creditsText(availableMicrocredits, 'down')} credits available`];
  if (heldMicrocredits > 0) parts.push(`${creditsText(heldMicrocredits)} held for jobs`);
  if (typeof shareLeftMicrocredits === 'number')
    parts.push(`${creditsText(shareLeftMicrocredits, 'down')} left of your share this month`);
  if (quote) {
    const left = availableMicrocredits - quote.expectedMicrocredits;
    parts.push(
      left >= 0
        ? `about ${creditsText(left, 'down')} after the quote on this page`
        : `about ${creditsText(-left, 'up')} too few for the quote on this page`,
    );
  }
  return `${parts.join(', ')}.`;
}
