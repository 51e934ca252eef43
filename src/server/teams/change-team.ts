/** Changes a team's name or time zone. Its slug stays: links and scripts hold it. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from './authorise.ts';
import { presentTeam, type PresentedTeam } from './read-team.ts';

export async function changeTeam(options: {
  actor: Actor;
  team: string;
  name?: string | undefined;
  timeZone?: string | undefined;
}): Promise<Result<{ team: PresentedTeam }>> {
  const { actor, name, timeZone } = options;
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor, team: options.team, permission: 'team:manage' });
    if (!authorised.ok) return authorised;
    if (timeZone !== undefined && !isTimeZone(timeZone))
      return refuse('invalid_input', 'This time zone is not known; nothing was changed.', {
        errors: [{ path: 'timeZone', code: 'unknown', message: 'A name of the IANA list, such as Europe/London.' }],
      });
    const { team, roles } = authorised.value;
    await team.update({ ...(name === undefined ? {} : { name }), ...(timeZone === undefined ? {} : { timeZone }) });
    return accept({ team: presentTeam({ team, roles, actor }) });
  });
}

function isTimeZone(name: string): boolean {
  try {
    return new Intl.DateTimeFormat('en', { timeZone: name }).resolvedOptions().timeZone !== '';
  } catch {
    return false;
  }
}
