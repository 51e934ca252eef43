/** Lets lucia keep sessions in our database: only the SHA-256 of a session id is stored, and no session outlives 30 days. */
import type { Adapter, DatabaseSession, DatabaseUser } from 'lucia';
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Session, User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { nowText } from '../clock.ts';
import { hashSecret } from './secret-hash.ts';

export interface SessionAttributes {
  createdAt: string;
  reauthenticatedAt: string;
  userAgent: string | null;
  address: string | null;
}

const dayMs = 24 * 60 * 60 * 1000;

/** The id as lucia gave it for the session of a cookie; the stored hash where only that is known. */
const toLucia = (row: Session, id: string): DatabaseSession => ({
  id,
  userId: row.userId,
  expiresAt: new Date(row.expiresAt),
  attributes: {
    createdAt: row.createdAt,
    reauthenticatedAt: row.reauthenticatedAt,
    userAgent: row.userAgent,
    address: row.address,
  },
});

export const sessionAdapter: Adapter = {
  async getSessionAndUser(sessionId): Promise<[DatabaseSession | null, DatabaseUser | null]> {
    const row = await Session.findByPk(hashSecret(sessionId));
    if (!row || row.expiresAt <= nowText() || row.createdAt <= nowText(-limits.sessionDays * dayMs))
      return [null, null];
    const user = await User.findByPk(row.userId);
    if (!user) return [null, null];
    const { name, email, operator } = user;
    return [toLucia(row, sessionId), { id: user.id, attributes: { name, email, operator } }];
  },
  async getUserSessions(userId) {
    return (await Session.findAll({ where: { userId } })).map((row) => toLucia(row, row.id));
  },
  async setSession({ id, userId, expiresAt, attributes }) {
    await inWriteTransaction(() =>
      Session.create({ id: hashSecret(id), userId, expiresAt: expiresAt.toISOString(), ...attributes }),
    );
  },
  async updateSessionExpiration(sessionId, expiresAt) {
    await inWriteTransaction(() =>
      Session.update({ expiresAt: expiresAt.toISOString() }, { where: { id: hashSecret(sessionId) } }),
    );
  },
  async deleteSession(sessionId) {
    await inWriteTransaction(() => Session.destroy({ where: { id: hashSecret(sessionId) } }));
  },
  async deleteUserSessions(userId) {
    await inWriteTransaction(() => Session.destroy({ where: { userId } }));
  },
  async deleteExpiredSessions() {
    await inWriteTransaction(() => Session.destroy({ where: { expiresAt: { [Op.lte]: nowText() } } }));
  },
};
