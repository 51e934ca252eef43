/**
 * Sends what waits in the outbox, oldest first, each at least once: the mark follows the sending, so a crash between
 * the two sends again, under the same Message-ID, which receivers fold into one.
 */
import { Op } from 'sequelize';
import type { Transporter } from 'nodemailer';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Mail } from '@db/models/teams.ts';
import { nowMs, nowText } from '../clock.ts';
import { env } from '../env.ts';
import { log } from '../log.ts';

/** 5 s, 10 s, 20 s … up to an hour: 24 attempts reach over more than half a day of an unreachable server. */
const firstDelayMs = 5_000;
const longestDelayMs = 60 * 60 * 1000;
const attemptsMaximum = 24;

export const retryDelayMs = (attempts: number): number => Math.min(longestDelayMs, firstDelayMs * 2 ** (attempts - 1));

/** Resolves to the milliseconds until the next mail is due, or null when none waits. `stopping` ends between mails. */
export async function sendOutbox(options: {
  transport: Transporter;
  stopping?: () => boolean;
}): Promise<number | null> {
  const { transport, stopping = () => false } = options;
  while (!stopping()) {
    const mail = await Mail.findOne({
      where: { state: 'queued', nextAttemptAt: { [Op.lte]: nowText() } },
      order: [
        ['nextAttemptAt', 'ASC'],
        ['id', 'ASC'],
      ],
    });
    if (!mail) break;
    await sendOne(mail, transport);
  }
  const next = await Mail.findOne({ where: { state: 'queued' }, order: [['nextAttemptAt', 'ASC']] });
  return next?.nextAttemptAt ? Math.max(0, Date.parse(next.nextAttemptAt) - nowMs()) : null;
}

async function sendOne(mail: Mail, transport: Transporter): Promise<void> {
  try {
    await transport.sendMail({
      messageId: `<${mail.id}@${new URL(env().PUBLIC_URL).hostname}>`,
      date: new Date(mail.createdAt),
      from: env().MAIL_FROM,
      to: { name: '', address: mail.recipient },
      subject: mail.subject,
      text: mail.text ?? '',
      ...(mail.html ? { html: mail.html } : {}),
      attachments: (mail.attachments ?? []).map(({ filename, contentType, base64 }) => ({
        filename,
        contentType,
        content: Buffer.from(base64, 'base64'),
      })),
      headers: { 'Auto-Submitted': 'auto-generated' },
      disableFileAccess: true,
      disableUrlAccess: true,
    });
  } catch (error) {
    await recordFailure(mail, error as Error & { responseCode?: number });
    return;
  }
  await inWriteTransaction(() =>
    mail.update({
      state: 'sent',
      attempts: mail.attempts + 1,
      sentAt: nowText(),
      nextAttemptAt: null,
      lastError: null,
      text: null,
      html: null,
      attachments: null,
    }),
  );
  log().info({ mail: mail.id }, 'mail sent');
}

/** A server's “no” (5xx) is final after three tries; silence and “not now” (4xx) are tried for longer. */
async function recordFailure(mail: Mail, error: Error & { responseCode?: number }): Promise<void> {
  const attempts = mail.attempts + 1;
  const final = attempts >= ((error.responseCode ?? 0) >= 500 ? 3 : attemptsMaximum);
  await inWriteTransaction(() =>
    mail.update({
      attempts,
      lastError: error.message.slice(0, 500),
      ...(final
        ? { state: 'failed', nextAttemptAt: null, text: null, html: null, attachments: null }
        : { nextAttemptAt: nowText(retryDelayMs(attempts)) }),
    }),
  );
  log()[final ? 'error' : 'warn']({ mail: mail.id, attempts, reason: error.message }, 'mail not sent');
}
