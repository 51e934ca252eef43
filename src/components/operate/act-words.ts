/** Operators' acts in words. */
import { exactCreditsText } from '@/components/ui/amounts-text.ts';

const words: Record<string, string> = {
  add_price_book: 'Price book added',
  grant_goodwill: 'Goodwill granted',
  mark_transfer_received: 'Transfer marked received',
  answer_invoice: 'Invoice answered',
  refund_purchase: 'Purchase refunded',
  settle_receivable: 'Receivable settled',
  write_off_receivable: 'Receivable written off',
};

/** An act that is not in the list is shown by its stored name. */
export const actWords = (act: string): string => words[act] ?? act.replaceAll('_', ' ');

export const detailWords = (details: Record<string, unknown>): string =>
  Object.entries(details)
    .map(([name, value]) =>
      name === 'microcredits' && typeof value === 'number'
        ? `${exactCreditsText(value)} credits`
        : name === 'version'
          ? `version ${String(value)}`
          : String(value),
    )
    .join(' · ');
