/** Writes about open pro-formas: once three days before they are due, once when they are overdue. */
import { Op } from 'sequelize';
import { ProForma } from '@db/models/billing.ts';
import { Team } from '@db/models/people.ts';
import { dayText, moneyText } from '@/domain/billing/money-text.ts';
import { paths } from '@/paths.ts';
import { nowText } from '../clock.ts';
import { env } from '../env.ts';
import { composeLetter } from '../mail/compose-letter.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { moneyRecipients } from './money-recipients.ts';

const noticeMs = 3 * 24 * 60 * 60 * 1000;

/** Repeating a round writes nothing twice. Answers how many pro-formas were due or overdue. */
export async function remindProFormas(): Promise<number> {
  const rows = await ProForma.findAll({
    where: { state: 'open', dueAt: { [Op.lte]: nowText(noticeMs) } },
    order: [['id', 'ASC']],
  });
  for (const row of rows) await remind(row);
  return rows.length;
}

async function remind(row: ProForma): Promise<void> {
  const { id, teamId, number, dueAt, totalMinor, currency, purchaseOrder, userId } = row;
  const team = await Team.findByPk(teamId);
  if (!team) throw new Error(`Pro-forma ${number} belongs to no team.`);
  const overdue = dueAt < nowText();
  const letter = composeLetter({
    subject: overdue ? `Pro-forma ${number} is overdue` : `Pro-forma ${number} is due on ${dayText(dueAt)}`,
    paragraphs: [
      `${moneyText(totalMinor, currency)} for ${team.name} ${overdue ? 'was' : 'is'} due on ${dayText(dueAt)}${purchaseOrder ? ` (PO ${purchaseOrder})` : ''}. The transfer has not arrived yet.`,
      'The credits can be used, and the invoice is issued, once it has. If it is on its way, there is nothing to do.',
    ],
    action: { label: 'See the pro-forma', url: `${env().PUBLIC_URL}${paths.proFormas(team.slug)}` },
  });
  for (const to of await moneyRecipients({ teamId, buyerUserId: userId }))
    await queueMail({ ...letter, to, messageKey: `pro-forma-${overdue ? 'overdue' : 'due'}:${id}:${to}` });
}
