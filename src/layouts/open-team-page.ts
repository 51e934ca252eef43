/**
 * What every page of a team begins with: who may see it, the team, the balance for the column.
 *
 *   const { shell, refused } = await openTeamPage(Astro, 'jobs:read');
 *   if (refused) return refused;
 *   …
 *   <App {shell} section="jobs" title="Jobs">…</App>
 */
import type { AstroGlobal } from 'astro';
import { paths } from '@/paths.ts';
import { mayDo, type Permission, type Role } from '@/domain/teams/permissions.ts';
import { readAccount } from '@/server/auth/read-account.ts';
import { readStanding, type Standing } from '@/server/billing/read-standing.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { authorise } from '@/server/teams/authorise.ts';

export interface TeamShell {
  team: { slug: string; name: string; timeZone: string; suspendedAt: string | null; suspensionReason: string | null };
  teams: { slug: string; name: string }[];
  person: { name: string; email: string };
  roles: readonly Role[];
  may: (permission: Permission) => boolean;
  balance: { availableMicrocredits: number; heldMicrocredits: number } | null;
  standing: Standing;
}
type Opened = { shell: TeamShell; refused?: undefined } | { shell?: undefined; refused: Response };

/** Signed out: to the sign-in page and back. No member: not found. Without the permission: a page that says whom to ask. */
export async function openTeamPage(page: AstroGlobal, permission: Permission): Promise<Opened> {
  const { actor, person } = page.locals;
  const slug = page.params['team'] ?? '';
  const authorised = await authorise({ actor, team: slug, permission });
  if (!authorised.ok) return { refused: await refusedPage(page, authorised.code) };
  const account = await readAccount({ actor });
  if (!person || !account.ok) return { refused: await refusedPage(page, 'not_signed_in') };
  const { team, roles } = authorised.value;
  const balance = mayDo(roles, 'credits:read') ? await readBalance(team.id) : null;
  return {
    shell: {
      team: {
        slug: team.slug,
        name: team.name,
        timeZone: team.timeZone,
        suspendedAt: team.suspendedAt,
        suspensionReason: team.suspensionReason,
      },
      teams: account.value.teams,
      person: { name: person.name, email: person.email },
      roles,
      may: (wanted) => mayDo(roles, wanted),
      standing: await readStanding(team.id),
      balance: balance && { availableMicrocredits: balance.available, heldMicrocredits: balance.held },
    },
  };
}

/** The page for a refusal, under the same address. Pages may use it for refusals of their own services too. */
export async function refusedPage(page: AstroGlobal, code: string): Promise<Response> {
  if (code === 'not_signed_in')
    return page.redirect(`${paths.signIn}?next=${encodeURIComponent(page.url.pathname + page.url.search)}`);
  return page.rewrite(code === 'forbidden' ? '/403' : '/404');
}
