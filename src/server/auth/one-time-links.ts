/** One-time links: the mail holds the token, the database its hash; each works once, until it expires or is withdrawn. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { OneTimeLink, type SignUpDetails } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { hashSecret, newSecret } from './secret-hash.ts';

export interface NewLink {
  purpose: OneTimeLink['purpose'];
  email: string;
  lifetimeMs: number;
  userId?: string;
  teamId?: string;
  roles?: Role[];
  details?: SignUpDetails;
  invitedBy?: string;
}

export async function issueLink(options: NewLink): Promise<{ link: OneTimeLink; token: string }> {
  const { purpose, email, lifetimeMs, userId, teamId, roles, details, invitedBy } = options;
  const token = newSecret();
  const link = await inWriteTransaction(() =>
    OneTimeLink.create({
      id: newId('link'),
      tokenHash: hashSecret(token),
      purpose,
      email,
      userId: userId ?? null,
      teamId: teamId ?? null,
      roles: roles ?? null,
      details: details ?? null,
      invitedBy: invitedBy ?? null,
      createdAt: nowText(),
      expiresAt: nowText(lifetimeMs),
    }),
  );
  return { link, token };
}

/** One answer for unknown, used, expired and withdrawn: which of them it was is nobody's business. */
export const deadLink = (): ReturnType<typeof refuse> =>
  refuse('link_expired', 'This link was used already, has expired or was withdrawn. Ask for a new one.');

export async function findLink(options: {
  token: string;
  purpose: OneTimeLink['purpose'];
}): Promise<Result<OneTimeLink>> {
  const link = await OneTimeLink.findOne({ where: { tokenHash: hashSecret(options.token), purpose: options.purpose } });
  if (!link || link.usedAt || link.revokedAt || link.expiresAt <= nowText()) return deadLink();
  return accept(link);
}

/** Inside the write transaction of what the link is for: of two that race, the second is refused. */
export async function useLink(link: OneTimeLink): Promise<Result<null>> {
  const now = nowText();
  const [changed] = await OneTimeLink.update(
    { usedAt: now, details: null },
    { where: { id: link.id, usedAt: null, revokedAt: null } },
  );
  return changed === 1 && link.expiresAt > now ? accept(null) : deadLink();
}

/** Withdraws open links: those of a person's reset, of an address's invitation to one team. */
export async function withdrawLinks(where: {
  purpose: OneTimeLink['purpose'];
  userId?: string;
  teamId?: string;
  email?: string;
}): Promise<void> {
  await inWriteTransaction(() =>
    OneTimeLink.update({ revokedAt: nowText(), details: null }, { where: { ...where, usedAt: null, revokedAt: null } }),
  );
}
