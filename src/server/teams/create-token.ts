/** Creates an API token for the person signed in; the secret is in this answer and nowhere else. */
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ApiToken, User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { TokenScope } from '@/domain/teams/permissions.ts';
import { issueToken } from '../auth/issue-token.ts';
import { nowText } from '../clock.ts';
import { authorise } from './authorise.ts';
import { presentToken, type PresentedToken } from './list-tokens.ts';

export interface CreateTokenOptions {
  actor: Actor;
  team: string;
  name: string;
  scopes: TokenScope[];
  /** Null: until revoked. */
  expiresInDays: number | null;
  /** What its launches may spend and hold in all; absent or null: no cap of its own. */
  capMicrocredits?: number | null;
}

export async function createToken(
  options: CreateTokenOptions,
): Promise<Result<{ token: PresentedToken; secret: string }>> {
  const { actor, name, scopes, expiresInDays, capMicrocredits = null } = options;
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor, team: options.team, permission: 'tokens:manage' });
    if (!authorised.ok) return authorised;
    const { team, userId } = authorised.value;
    const user = userId ? await User.findByPk(userId) : null;
    if (!user) return refuse('forbidden', 'A token belongs to a person.');
    const live = await ApiToken.count({
      where: {
        teamId: team.id,
        userId: user.id,
        revokedAt: null,
        [Op.or]: [{ expiresAt: null }, { expiresAt: { [Op.gt]: nowText() } }],
      },
    });
    if (live >= limits.tokensPerMember)
      return refuse('limit_reached', `A member has at most ${limits.tokensPerMember} live tokens. Revoke some first.`);
    const expiresAt = expiresInDays === null ? null : nowText(expiresInDays * 24 * 60 * 60 * 1000);
    const owner = { userId: user.id, teamId: team.id };
    const { token, secret } = await issueToken({ ...owner, name, scopes, expiresAt, capMicrocredits });
    return accept({ token: presentToken(token, user, 0), secret });
  });
}
