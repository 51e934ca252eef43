/** What waits for the person on the overview: ended badly, running dry, to be paid or reviewed. Read from services only. */
import type { CreditsAnswer } from '@/contracts/ledger.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { creditsText, dayText, moneyText } from '@/components/ui/amounts-text.ts';
import { paths } from '@/paths.ts';
import { listInvoices } from '@/server/billing/list-invoices.ts';
import { listProFormas } from '@/server/billing/list-pro-formas.ts';
import type { TeamShell } from './open-team-page.ts';

export interface Need {
  words: string;
  href: string;
  action: string;
}

/** Below this much, a team that has bought or spent anything is told. */
const lowMicrocredits = 5_000_000;

export async function whatNeedsAttention(options: {
  actor: Actor;
  shell: TeamShell;
  endedJobs: readonly JobDocument[];
  credits: CreditsAnswer;
}): Promise<Need[]> {
  const { actor, shell, endedJobs, credits } = options;
  const team = shell.team.slug;
  const needs: Need[] = [];
  for (const job of endedJobs) {
    if (job.state === 'stopped_at_cap')
      needs.push({
        words: `“${job.name}” stopped at its cap with ${job.replicatesDone.toLocaleString('en-GB')} of ${job.replicatesPlanned.toLocaleString('en-GB')} replicates.`,
        href: paths.job(team, job.id),
        action: 'Look at it',
      });
    if (job.state === 'failed')
      needs.push({ words: `“${job.name}” failed.`, href: paths.job(team, job.id), action: 'See why' });
  }
  if (credits.availableMicrocredits < lowMicrocredits && credits.spentMicrocredits > 0)
    needs.push({
      words: `${creditsText(credits.availableMicrocredits, 'down')} credits are left.`,
      href: `${paths.credits(team)}${shell.may('billing:write') ? '#buy' : ''}`,
      action: shell.may('billing:write') ? 'Buy credits' : 'See credits',
    });
  if (shell.may('billing:read')) needs.push(...(await moneyNeeds(actor, shell)));
  return needs;
}

/** Transfers to make and invoices that nobody has looked at. */
async function moneyNeeds(actor: Actor, shell: TeamShell): Promise<Need[]> {
  const team = shell.team.slug;
  const [proFormas, invoices] = await Promise.all([
    listProFormas({ actor, team, limit: 20 }),
    listInvoices({ actor, team, review: 'to_review', limit: 20 }),
  ]);
  const needs: Need[] = [];
  for (const one of proFormas.ok ? proFormas.value.proFormas : [])
    if (one.state === 'open')
      needs.push({
        words: `Pro-forma ${one.number}, ${moneyText(one.total.amountMinor, one.total.currency)}, ${
          one.overdue ? 'was' : 'is'
        } due on ${dayText(one.dueAt, shell.team.timeZone)}.`,
        href: paths.proFormas(team),
        action: 'See pro-formas',
      });
  const toReview = invoices.ok ? invoices.value.invoices.length : 0;
  if (toReview > 0 && shell.may('billing:write'))
    needs.push({
      words: toReview === 1 ? 'One invoice is to be reviewed.' : `${toReview} invoices are to be reviewed.`,
      href: `${paths.invoices(team)}?review=to_review`,
      action: 'Review',
    });
  return needs;
}
