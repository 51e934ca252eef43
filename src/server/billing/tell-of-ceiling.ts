/** Says once a month that automatic top-up has reached its ceiling. */
import type { AutomaticTopUp } from '@db/models/cards.ts';
import type { Team } from '@db/models/people.ts';
import { moneyText } from '@/domain/billing/money-text.ts';
import { paths } from '@/paths.ts';
import { env } from '../env.ts';
import { composeLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { ownersAndBillingAddress } from './money-recipients.ts';

/** Inside the caller's write transaction. */
export async function tellOfCeiling(options: {
  team: Team;
  setting: AutomaticTopUp;
  month: string;
  spentMinor: number;
}): Promise<void> {
  const { team, setting, month, spentMinor } = options;
  if (setting.ceilingToldMonth === month) return;
  await setting.update({ ceilingToldMonth: month });
  const { monthlyCeilingMinor, currency } = setting;
  const letter = composeLetter({
    subject: `Automatic top-up of ${team.name} has reached its ceiling for ${month}`,
    paragraphs: [
      `Automatic top-ups have charged ${moneyText(spentMinor, currency)} this month; another one would go beyond the ceiling of ${moneyText(monthlyCeilingMinor, currency)}. None begins until next month unless the ceiling is raised.`,
      'Credits can still be bought by hand.',
    ],
    action: { label: 'Look at automatic top-up', url: `${env().PUBLIC_URL}${paths.automaticTopUp(team.slug)}` },
    closing: ['This mail is sent once a month at most.'],
  });
  for (const to of await ownersAndBillingAddress(team.id))
    await queueMail({ ...letter, to, messageKey: `top-up-ceiling:${team.id}:${month}:${monthlyCeilingMinor}:${to}` });
}
