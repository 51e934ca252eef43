/** Heals what webhooks did not bring: asks about open disputes, and once an hour for ones that we never heard of. */
import { Op } from 'sequelize';
import { Dispute } from '@db/models/cards.ts';
import { nowText } from '../clock.ts';
import { listDisputeIds } from './payment-disputes.ts';
import { refreshDispute } from './refresh-dispute.ts';

/** Longer than a service may be away from us. */
const lookBackMs = 30 * 24 * 60 * 60 * 1000;

/** A round: open disputes whose time has come. Answers how many were asked about. */
export async function reconcileDisputes(): Promise<number> {
  const due = await Dispute.findAll({
    where: { state: 'open', nextCheckAt: { [Op.lte]: nowText() } },
    attributes: ['id'],
    limit: 50,
  });
  for (const { id } of due) await refreshDispute(id);
  return due.length;
}

/** Answers how many disputes of ours were found that no event had told of. */
export async function findUnheardDisputes(): Promise<number> {
  const listed = await listDisputeIds(nowText(-lookBackMs));
  if (!listed.ok) return 0;
  const known = await Dispute.findAll({ where: { id: listed.value }, attributes: ['id'] });
  const unheard = listed.value.filter((id) => !known.some((dispute) => dispute.id === id));
  for (const id of unheard) await refreshDispute(id);
  return Dispute.count({ where: { id: unheard } });
}
