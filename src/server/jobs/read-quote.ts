/** Reads one quote as it was given. */
import { Quote } from '@db/models/jobs.ts';
import type { QuoteDocument } from '@/contracts/jobs.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { presentQuote } from './present-quote.ts';

export async function readQuote(options: {
  actor: Actor;
  team: string;
  quote: string;
}): Promise<Result<{ quote: QuoteDocument }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:read' });
  if (!authorised.ok) return authorised;
  const quote = await Quote.findOne({ where: { id: options.quote, teamId: authorised.value.team.id } });
  return quote ? accept({ quote: presentQuote(quote) }) : refuse('not_found', 'There is no such quote in this team.');
}
