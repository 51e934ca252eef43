/** Where the person signed in is signed in. */
import { Op } from 'sequelize';
import { Session } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { requirePerson } from './require-person.ts';

export interface PresentedSession {
  id: string;
  createdAt: string;
  expiresAt: string;
  userAgent: string | null;
  address: string | null;
  /** The one that asks. */
  present: boolean;
}

export async function listSessions(options: {
  actor: Actor;
}): Promise<Result<{ sessions: PresentedSession[]; nextCursor: null }>> {
  const person = await requirePerson(options.actor);
  if (!person.ok) return person;
  const { user, sessionId } = person.value;
  const rows = await Session.findAll({
    where: { userId: user.id, expiresAt: { [Op.gt]: nowText() } },
    order: [['createdAt', 'DESC']],
  });
  const sessions = rows.map(({ id, createdAt, expiresAt, userAgent, address }) => ({
    id,
    createdAt,
    expiresAt,
    userAgent,
    address,
    present: id === sessionId,
  }));
  return accept({ sessions, nextCursor: null });
}
