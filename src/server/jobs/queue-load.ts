/** How much work is waiting or running, in worker seconds by lane. */
import { Op } from 'sequelize';
import { Job } from '@db/models/jobs.ts';
import type { QueueLoad } from '@/domain/jobs/quote-estimate.ts';

export async function queueLoad(): Promise<QueueLoad> {
  const open = await Job.findAll({
    where: { state: { [Op.in]: ['queued', 'running'] }, ending: null },
    attributes: ['lane', 'replicatesPlanned', 'replicatesDone', 'secondsPerReplicate'],
  });
  const load: QueueLoad = { express: 0, steady: 0, overnight: 0 };
  for (const { lane, replicatesPlanned, replicatesDone, secondsPerReplicate } of open)
    load[lane] += (replicatesPlanned - replicatesDone) * secondsPerReplicate;
  return load;
}
