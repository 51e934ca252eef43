/** Every migration, oldest first. */
import type { Migration } from '../migrate.ts';
import { people } from './0001-people.ts';

export const migrations: Migration[] = [people];
