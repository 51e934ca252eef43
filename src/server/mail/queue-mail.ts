/** Puts a mail into the outbox, within the write transaction of the act that it tells about. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { Mail } from '@db/models/teams.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { wakeMailPart } from './wake-mail-part.ts';

export interface MailAttachment {
  filename: string;
  contentType: string;
  content: Buffer;
}

export interface QueueMailOptions {
  /** One address. */
  to: string;
  /** One line. */
  subject: string;
  text: string;
  html?: string;
  attachments?: MailAttachment[];
  /** Names the occasion, such as `receipt:invoice_…`: a second mail with the same key is not queued. */
  messageKey: string;
}

/** Queued once per `messageKey` and sent after the transaction has committed; never when it rolls back. */
export async function queueMail(options: QueueMailOptions): Promise<void> {
  const { to, subject, text, html, attachments, messageKey } = options;
  if (/[\r\n]/.test(to + subject)) throw new Error('A recipient and a subject are single lines.');
  await inWriteTransaction(async () => {
    if (await Mail.findOne({ where: { messageKey }, attributes: ['id'] })) return;
    const now = nowText();
    await Mail.create({
      id: newId('mail'),
      messageKey,
      recipient: to,
      subject,
      text,
      html: html ?? null,
      attachments:
        attachments?.map(({ filename, contentType, content }) => ({
          filename,
          contentType,
          base64: content.toString('base64'),
        })) ?? null,
      state: 'queued',
      createdAt: now,
      nextAttemptAt: now,
    });
    afterCommit(wakeMailPart);
  });
}
