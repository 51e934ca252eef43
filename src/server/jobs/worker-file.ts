/** Finds the bundled simulation worker from the project's root: the build's, or in development the watched one. */
import { existsSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { projectRoot } from '../project-root.ts';

/** Beside the built server when this code runs from a build, whatever the build's folder is called. */
const besideBuild = (): string | null => {
  const folder = path.dirname(fileURLToPath(import.meta.url)).split(path.sep);
  const server = folder.lastIndexOf('server');
  if (server < 1) return null;
  return path.join(folder.slice(0, server).join(path.sep), 'workers', 'run-batch.mjs');
};

export function workerFile(): string {
  const candidates = [
    besideBuild(),
    path.join(projectRoot, 'node_modules/.cache/burette-workers/run-batch.mjs'),
    path.join(projectRoot, 'dist/workers/run-batch.mjs'),
  ];
  const found = candidates.find((file) => file !== null && existsSync(file));
  if (!found) throw new Error('The simulation worker is not built: run `npm run build`.');
  return found;
}
