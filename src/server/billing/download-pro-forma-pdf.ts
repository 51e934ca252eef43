/** The PDF of a pro-forma of the team. */
import { ProForma } from '@db/models/billing.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import type { PrintedFile } from './file-response.ts';
import { printProForma } from './print-pro-forma.ts';

export async function downloadProFormaPdf(options: {
  actor: Actor;
  team: string;
  proFormaId: string;
}): Promise<Result<PrintedFile>> {
  const authorised = await authorise({ ...options, permission: 'billing:read' });
  if (!authorised.ok) return authorised;
  const row = await ProForma.findOne({ where: { id: options.proFormaId, teamId: authorised.value.team.id } });
  if (!row) return refuse('not_found', 'This team has no such pro-forma.');
  return accept({ content: await printProForma(row), filename: `${row.number}.pdf` });
}
