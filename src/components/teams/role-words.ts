/** Roles in words, the same on every page and in every choice. */
import type { Role } from '@/domain/teams/permissions.ts';

export const roleWords: Record<Role, { name: string; may: string }> = {
  owner: { name: 'Owner', may: 'everything in the team' },
  finance: { name: 'Finance', may: 'credits, invoices, project codes; launches nothing' },
  modeller: { name: 'Modeller', may: 'models, quotes, jobs' },
  viewer: { name: 'Viewer', may: 'reads models and results' },
};
