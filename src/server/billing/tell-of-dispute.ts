/** Writes to owners and billing address about a dispute: opened, won, lost. */
import { Invoice } from '@db/models/billing.ts';
import type { Dispute, Receivable } from '@db/models/cards.ts';
import { Team } from '@db/models/people.ts';
import { moneyText } from '@/domain/billing/money-text.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { paths } from '@/paths.ts';
import { env } from '../env.ts';
import { composeLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { ownersAndBillingAddress } from './money-recipients.ts';

/** Inside the caller's write transaction. */
export async function tellOfDispute(
  dispute: Dispute,
  what: 'opened' | 'won' | 'lost',
  owed: Receivable | null = null,
): Promise<void> {
  const team = await Team.findByPk(dispute.teamId, { rejectOnEmpty: true });
  const { number } = await Invoice.findByPk(dispute.invoiceId, { rejectOnEmpty: true });
  const money = moneyText(dispute.totalMinor, dispute.currency);
  const words = {
    opened: {
      subject: `A payment of ${team.name} is disputed`,
      paragraphs: [
        `The bank of the card’s holder disputes the payment of ${money} for invoice ${number}. ${creditsText(dispute.frozenMicrocredits)} that it bought and that are unused are frozen until the bank decides. What running jobs hold is not touched; what they give back is frozen too.`,
        'If nobody with you meant to dispute it, ask the bank to withdraw it.',
      ],
    },
    won: {
      subject: `The payment for invoice ${number} stands`,
      paragraphs: [`The dispute over ${money} was decided for the payment. What was frozen can be used again.`],
    },
    lost: {
      subject: `The bank took the payment for invoice ${number} back`,
      paragraphs: [
        `The dispute over ${money} was decided against the payment. ${creditsText(dispute.takenMicrocredits)} that were unused have been taken back${dispute.takenMicrocredits > 0 ? ', with a credit note' : ''}.`,
        owed
          ? `What had been spent or is held by jobs is owed: ${moneyText(owed.totalMinor, owed.currency)}. No job can be launched until it is paid. Jobs that run go on. Write to us in the thread of the invoice to settle it.`
          : 'Nothing is owed.',
      ],
    },
  }[what];
  const letter = composeLetter({
    ...words,
    action: {
      label: 'See the invoice',
      url: `${env().PUBLIC_URL}${paths.invoice(team.slug, dispute.invoiceId)}`,
    },
  });
  for (const to of await ownersAndBillingAddress(team.id))
    await queueMail({ ...letter, to, messageKey: `dispute-${what}:${dispute.id}:${to}` });
}
