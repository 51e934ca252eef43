/** Who is asking. Services take an actor first and authorise it themselves. */
import type { Permission } from './permissions.ts';

export type Actor =
  | { kind: 'anonymous' }
  | { kind: 'user'; userId: string; operator: boolean; sessionId: string }
  | { kind: 'token'; userId: string; teamId: string; tokenId: string; scopes: readonly Permission[] }
  /** Our own processes: seeding, scheduled work. */
  | { kind: 'system'; reason: string };

/** A stable name for scoping keys and rate limits. */
export function principalName(actor: Actor): string {
  switch (actor.kind) {
    case 'anonymous':
      return 'anonymous';
    case 'user':
      return actor.userId;
    case 'token':
      return actor.tokenId;
    case 'system':
      return `system:${actor.reason}`;
  }
}
