/** Where the migrated database that every test file copies is kept. */
import path from 'node:path';
import { projectRoot } from '@/server/project-root.ts';

export const migratedTemplate = path.join(projectRoot, 'node_modules/.cache/burette-tests/migrated.sqlite');
