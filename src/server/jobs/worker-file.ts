/** Finds a bundled worker from the project's root: the build's, or in development the watched one. */
import { existsSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { projectRoot } from '../project-root.ts';

/** Beside the built server when this code runs from a build, whatever the build's folder is called. */
const besideBuild = (file: string): string | null => {
  const folder = path.dirname(fileURLToPath(import.meta.url)).split(path.sep);
  const server = folder.lastIndexOf('server');
  if (server < 1) return null;
  return path.join(folder.slice(0, server).join(path.sep), 'workers', file);
};

export function workerFile(name: 'run-batch' | 'write-results'): string {
  const file = `${name}.mjs`;
  const candidates = [
    besideBuild(file),
    path.join(projectRoot, 'node_modules/.cache/burette-workers', file),
    path.join(projectRoot, 'dist/workers', file),
  ];
  const found = candidates.find((candidate) => candidate !== null && existsSync(candidate));
  if (!found) throw new Error(`The worker ${name} is not built: run \`npm run build\`.`);
  return found;
}
