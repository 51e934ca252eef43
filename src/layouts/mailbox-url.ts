/** The page of the local mail fake, where there is one: a local installation only. */
import { env } from '@/server/env.ts';

export const mailboxUrl = (): string | null => (env().SMTP_URL ? null : (env().MAILBOX_URL ?? null));
