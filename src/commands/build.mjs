// Builds the server, the pages and the workers when their sources changed since the last build.
import { createHash } from 'node:crypto';
import { existsSync } from 'node:fs';
import { readdir, readFile, writeFile } from 'node:fs/promises';
import path from 'node:path';
import { root, run, Stop } from './processes.mjs';

const sources = ['src', 'db', 'workers', 'public'];
const files = [
  'package-lock.json',
  'astro.config.mjs',
  'astro.integration.mjs',
  'tailwind.config.mjs',
  'tsconfig.json',
];

async function hashSources() {
  const hash = createHash('sha256');
  const all = [...files];
  for (const folder of sources)
    for (const entry of await readdir(path.join(root, folder), { recursive: true, withFileTypes: true }))
      if (entry.isFile() && !/\.test\.tsx?$/.test(entry.name))
        all.push(path.relative(root, path.join(entry.parentPath, entry.name)));
  for (const file of all.sort()) hash.update(`${file}\n`).update(await readFile(path.join(root, file)));
  return hash.digest('hex');
}

/** Builds into `dist` (or `BURETTE_OUT_DIR`) and returns the folder. */
export async function build() {
  const outDir = path.resolve(root, process.env.BURETTE_OUT_DIR ?? 'dist');
  const stampFile = path.join(outDir, '.burette-built');
  const stamp = await hashSources();
  if (existsSync(stampFile) && (await readFile(stampFile, 'utf8')) === stamp) return outDir;
  console.log('Building…');
  const { code, output } = await run(path.join(root, 'node_modules/.bin/astro'), ['build'], {
    cwd: root,
    capture: true,
    env: { NODE_ENV: 'production', ASTRO_TELEMETRY_DISABLED: '1' },
  });
  if (code !== 0) throw new Stop(`The build failed:\n${output.split('\n').slice(-40).join('\n')}`);
  await writeFile(stampFile, stamp);
  return outDir;
}
