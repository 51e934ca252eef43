/** Switches automatic top-up off because a payment did not pass, and writes to owners and billing address what to do. */
import type { TopUp } from '@db/models/billing.ts';
import { AutomaticTopUp, SavedCard } from '@db/models/cards.ts';
import type { Team } from '@db/models/people.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { moneyText } from '@/domain/billing/money-text.ts';
import { paths } from '@/paths.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { composeLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { ownersAndBillingAddress } from './money-recipients.ts';

/** Joins the caller's write transaction. When it is not on, nothing happens and nobody is written to. */
export async function stopAutomaticTopUp(options: {
  team: Team;
  /** A sentence. */
  problem: string;
  needsHolder: boolean;
  /** The top-up that did not pass; null when none could begin. */
  attempt: TopUp | null;
}): Promise<void> {
  const { team, problem, needsHolder, attempt } = options;
  await inWriteTransaction(async () => {
    const updatedAt = nowText();
    const [stopped] = await AutomaticTopUp.update(
      { state: 'stopped', problem, updatedAt },
      { where: { teamId: team.id, state: 'on' } },
    );
    if (stopped === 0) return;
    const letter = composeLetter({
      subject: `Automatic top-up of ${team.name} did not pass and is switched off`,
      paragraphs: [
        `${attempt ? await attemptWords(attempt) : 'A top-up could not begin.'} ${problem} Nothing was charged.`,
        needsHolder
          ? 'The bank asks the holder of this card to confirm each payment, which cannot happen while nobody is there. Save another card and switch automatic top-up on again, or buy credits by hand.'
          : 'Save another card, or look at the settings, and switch automatic top-up on again; or buy credits by hand.',
      ],
      action: { label: 'Look at automatic top-up', url: `${env().PUBLIC_URL}${paths.automaticTopUp(team.slug)}` },
      closing: ['Jobs that run are not touched: what they may spend is held already.'],
    });
    const occasion = attempt?.id ?? `${team.id}:${updatedAt}`;
    for (const to of await ownersAndBillingAddress(team.id))
      await queueMail({ ...letter, to, messageKey: `top-up-declined:${occasion}:${to}` });
  });
}

async function attemptWords({ totalMinor, currency, pack, paymentMethodId }: TopUp): Promise<string> {
  const card = await SavedCard.findByPk(paymentMethodId ?? '');
  const ending = card ? ` ending ${card.lastFour}` : '';
  return `${moneyText(totalMinor, currency)} for ${Number(pack).toLocaleString('en')} credits could not be charged to the card${ending}.`;
}
