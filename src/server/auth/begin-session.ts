/** Begins a session for somebody who has just proved who they are; the one they came with ends (no id is ever kept). */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Session } from '@db/models/people.ts';
import { nowText } from '../clock.ts';
import { sessions } from './sessions.ts';
import type { Visitor } from './visitor.ts';

/** The session's id in clear: it belongs in the cookie and nowhere else. */
export interface BegunSession {
  secret: string;
}

export async function beginSession(options: { userId: string; visitor: Visitor }): Promise<BegunSession> {
  const { userId, visitor } = options;
  const now = nowText();
  return inWriteTransaction(async () => {
    if (visitor.sessionId) await Session.destroy({ where: { id: visitor.sessionId } });
    const { id } = await sessions().createSession(userId, {
      createdAt: now,
      reauthenticatedAt: now,
      userAgent: visitor.userAgent,
      address: visitor.address,
    });
    return { secret: id };
  });
}
