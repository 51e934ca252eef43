/** The mail that says how a job ended. */
import type { Job } from '@db/models/jobs.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { paths } from '@/paths.ts';
import { env } from '../env.ts';
import { composeLetter, type ComposedLetter } from '../mail/compose-letter.ts';

const subjects: Partial<Record<Job['state'], string>> = {
  done: 'Job done',
  stopped_at_cap: 'Job stopped at its cap',
  cancelled: 'Job cancelled',
  failed: 'Job failed',
};

export function jobEndedMail(options: { job: Job; team: string; name: string }): ComposedLetter {
  const { job, team, name } = options;
  return composeLetter({
    subject: `${subjects[job.state]}: ${job.name}`.replaceAll(/\s+/g, ' '),
    paragraphs: [
      `Hello ${name},`,
      `“${job.name}”: ${job.ending?.detail}`,
      `Replicates: ${job.replicatesDone.toLocaleString('en')} of ${job.replicatesPlanned.toLocaleString('en')}. ` +
        `Events: ${job.events.toLocaleString('en')}.`,
      `Charged: ${creditsText(job.chargedMicrocredits)}, under a cap of ${creditsText(job.capMicrocredits)}. ` +
        'What was held beyond the charge is available again.',
    ],
    action: { label: 'See the job', url: env().PUBLIC_URL + paths.job(team, job.id) },
  });
}
