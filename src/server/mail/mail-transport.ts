/** How mails leave: SMTP at SMTP_URL, or at SMTP_FAKE_URL where nothing leaves this machine. */
import nodemailer, { type Transporter } from 'nodemailer';
import { env } from '../env.ts';

const timeouts = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 30_000 };

/** Null when neither is configured: mails then wait in the outbox. */
export function mailTransport(): Transporter | null {
  const { SMTP_URL, SMTP_FAKE_URL } = env();
  if (SMTP_URL) return nodemailer.createTransport({ url: SMTP_URL, ...timeouts });
  // The fake has no certificate; on this machine none is needed.
  if (SMTP_FAKE_URL)
    return nodemailer.createTransport({
      url: SMTP_FAKE_URL,
      ignoreTLS: true,
      ...timeouts,
    });
  return null;
}
