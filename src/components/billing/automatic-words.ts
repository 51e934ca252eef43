/** The state of automatic top-up in words. */
import { exactCreditsText, moneyText } from '@/components/ui/amounts-text.ts';
import type { StateTone } from '@/components/ui/StateLabel.tsx';
import type { AutomaticTopUpDocument, TopUpDocument } from '@/contracts/billing.ts';

export interface AutomaticWords {
  tone: StateTone;
  title: string;
  /** What happens next, or what to do. */
  words: string;
}

/** One is under way, or begins in a moment. */
export function topUpIsDue({
  state,
  settings,
  ceilingReached,
  availableMicrocredits,
  attempts,
}: AutomaticTopUpDocument) {
  const open = attempts.some((each) => each.state === 'pending' || each.state === 'processing');
  const low = settings !== null && availableMicrocredits < settings.thresholdMicrocredits;
  return open || (state === 'on' && low && !ceilingReached);
}

const written = (money: { amountMinor: number; currency: string } | null): string =>
  money ? moneyText(money.amountMinor, money.currency) : '–';

export function automaticWords(document: AutomaticTopUpDocument): AutomaticWords {
  const { state, settings, problem, nextTotal, spentThisMonth, ceilingReached } = document;
  if (state === 'unset' || !settings)
    return {
      tone: 'over',
      title: 'Not set up',
      words: 'Credits are bought by hand. With a saved card, a pack can be bought whenever little is left.',
    };
  if (state === 'off') return { tone: 'over', title: 'Off', words: 'Nothing is charged. The settings below are kept.' };
  if (state === 'stopped')
    return {
      tone: 'failed',
      title: 'Switched off: a payment did not pass',
      words: `${problem ?? ''} Save another card or change the settings, then switch it on again.`.trim(),
    };
  const { pack, thresholdMicrocredits, monthlyCeiling } = settings;
  if (topUpIsDue(document))
    return {
      tone: 'working',
      title: 'A top-up is under way',
      words: 'The card is being charged. The credits come when the payment service has confirmed it.',
    };
  if (ceilingReached)
    return {
      tone: 'caution',
      title: 'On, and at its ceiling for this month',
      words: `${written(spentThisMonth)} of ${written(monthlyCeiling)} have been charged; another ${written(nextTotal)} would go beyond it. None begins until next month unless the ceiling is raised.`,
    };
  return {
    tone: 'done',
    title: 'On',
    words: `${Number(pack).toLocaleString('en-GB')} credits are bought for ${written(nextTotal)}, tax included, when less than ${exactCreditsText(thresholdMicrocredits)} are available. ${written(spentThisMonth)} of at most ${written(monthlyCeiling)} have been charged this month.`,
  };
}

export const attemptWords: Record<TopUpDocument['state'], { tone: StateTone; words: string }> = {
  pending: { tone: 'working', words: 'Under way' },
  processing: { tone: 'working', words: 'Under way' },
  paid: { tone: 'done', words: 'Paid' },
  failed: { tone: 'failed', words: 'Did not pass' },
  expired: { tone: 'over', words: 'Never charged' },
};
