/** Reads what the product has queued in its outbox, as a receiver would read it. */
import { Mail } from '@db/models/teams.ts';

/** Mails to an address, oldest first. */
export const mailsTo = (recipient: string): Promise<Mail[]> =>
  Mail.findAll({ where: { recipient }, order: [['id', 'ASC']] });

/** The token in the newest mail to an address. */
export async function tokenInMailTo(recipient: string): Promise<string> {
  const mail = (await mailsTo(recipient)).at(-1);
  const token = /[?&]token=([\w-]+)/.exec(mail?.text ?? '')?.[1];
  if (!token) throw new Error(`No link was mailed to ${recipient}.`);
  return token;
}
