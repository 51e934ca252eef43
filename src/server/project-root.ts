/** The folder that holds package.json, found by walking up from this file: bundles move code, not the project. */
import { existsSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';

function findRoot(from: string): string {
  let folder = from;
  while (!existsSync(path.join(folder, 'package.json'))) {
    const parent = path.dirname(folder);
    if (parent === folder) throw new Error('package.json was not found above the server code.');
    folder = parent;
  }
  return folder;
}

export const projectRoot = findRoot(path.dirname(fileURLToPath(import.meta.url)));
