/** The mails about teams. */
import { limits } from '@/domain/limits.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { paths } from '@/paths.ts';
import { env } from '../env.ts';
import { composeLetter, type ComposedLetter } from '../mail/compose-letter.ts';

export const roleNames: Record<Role, string> = {
  owner: 'owner',
  finance: 'finance admin',
  modeller: 'modeller',
  viewer: 'viewer',
};

export const invitationLetter = (options: {
  teamName: string;
  invitedBy: string;
  roles: Role[];
  token: string;
}): ComposedLetter => {
  const { teamName, invitedBy, roles, token } = options;
  return composeLetter({
    subject: `${invitedBy} invites you to ${teamName} on Burette`,
    paragraphs: [
      `${invitedBy} invites you to join the team ${teamName} on Burette, as ${roles.map((role) => roleNames[role]).join(' and ')}.`,
    ],
    action: {
      label: 'See the invitation',
      url: `${env().PUBLIC_URL}${paths.invitation}?token=${encodeURIComponent(token)}`,
    },
    closing: [
      `The link works once, for ${limits.invitationDays} days, for the address this mail was sent to. If you do not know the sender, do nothing.`,
    ],
  });
};
