/** Sweeps what has run out: sessions, links, remembered answers. Nothing depends on it; expiry is checked at each use. */
import { Cron } from 'croner';
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { IdempotencyKey, OneTimeLink, Session } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { nowText } from '../clock.ts';
import { log } from '../log.ts';
import type { Part } from '../part.ts';

const dayMs = 24 * 60 * 60 * 1000;
/** Links stay readable for support this long after they ended; what a sign-up wished for does not. */
const linkKeepingDays = 90;

export async function sweepExpired(): Promise<void> {
  await inWriteTransaction(async () => {
    const now = nowText();
    await Session.destroy({
      where: {
        [Op.or]: [{ expiresAt: { [Op.lte]: now } }, { createdAt: { [Op.lte]: nowText(-limits.sessionDays * dayMs) } }],
      },
    });
    await OneTimeLink.update(
      { details: null },
      { where: { expiresAt: { [Op.lte]: now }, details: { [Op.ne]: null } as never } },
    );
    await OneTimeLink.destroy({ where: { expiresAt: { [Op.lte]: nowText(-linkKeepingDays * dayMs) } } });
    await IdempotencyKey.destroy({ where: { createdAt: { [Op.lte]: nowText(-dayMs) } } });
  });
}

export const authPart: Part = {
  name: 'auth',
  start: async () => {
    const sweep = new Cron('17 * * * *', { protect: true, unref: true }, () =>
      sweepExpired().catch((error: unknown) => log().error({ err: error }, 'sweeping failed')),
    );
    return async () => sweep.stop();
  },
};
