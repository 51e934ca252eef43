/** What runs beside the requests: each part starts at boot, in this order, and stops in the reverse one. */
import { authPart } from './auth/auth-part.ts';
import { billingPart } from './billing/billing-part.ts';
import { jobsPart } from './jobs/jobs-part.ts';
import { mailPart } from './mail/mail-part.ts';
import type { Part } from './part.ts';
import { webhooksPart } from './webhooks/webhooks-part.ts';

export const parts: Part[] = [authPart, mailPart, billingPart, webhooksPart, jobsPart];
