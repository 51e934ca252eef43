// Installs the packages of the lockfile when they are not there yet, and makes sure that sqlite3 has its native part.
import { createHash } from 'node:crypto';
import { existsSync } from 'node:fs';
import { readFile, writeFile } from 'node:fs/promises';
import path from 'node:path';
import { isPresent, root, run, Stop } from './processes.mjs';

const stampFile = path.join(root, 'node_modules/.burette-installed');

/** Node's own headers, shipped beside the program; with them node-gyp asks no network. */
function nodeHeaders() {
  const prefix = path.resolve(path.dirname(process.execPath), '..');
  return existsSync(path.join(prefix, 'include/node/node_api.h')) ? prefix : undefined;
}

const canLoadSqlite = async () =>
  (await run(process.execPath, ['-e', "require('sqlite3')"], { cwd: root, capture: true })).code === 0;

/** Whether somebody (a developer, with npm itself) has installed exactly the lockfile already. */
async function isInstalled() {
  const installed = path.join(root, 'node_modules/.package-lock.json');
  if (!existsSync(installed)) return false;
  const read = async (file) => JSON.parse(await readFile(file, 'utf8')).packages;
  const [wanted, present] = [await read(path.join(root, 'package-lock.json')), await read(installed)];
  return Object.entries(wanted).every(
    ([name, { version, optional }]) => name === '' || optional || present[name]?.version === version,
  );
}

async function missingTools() {
  const missing = [];
  for (const [tool, name] of [
    ['python3', 'python3'],
    ['make', 'make'],
    ['g++', 'g++'],
  ])
    if (!(await isPresent(tool))) missing.push(name);
  return missing;
}

async function buildSqlite(env) {
  console.log('Compiling sqlite3 with the headers that came with Node (no prebuilt binary could be had)…');
  const missing = await missingTools();
  if (missing.length > 0)
    throw new Stop(
      `sqlite3 has no prebuilt binary for this machine and cannot be compiled: ${missing.join(', ')} missing.\n` +
        `On Debian or Ubuntu: apt-get install -y python3 make g++ — then run this again.`,
    );
  const { code, output } = await run('npm', ['rebuild', 'sqlite3', '--build-from-source', '--foreground-scripts'], {
    cwd: root,
    env,
    capture: true,
  });
  if (code !== 0 || !(await canLoadSqlite()))
    throw new Stop(
      `sqlite3 could not be compiled. The compiler's last words:\n${output.split('\n').slice(-15).join('\n')}`,
    );
}

export async function install() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (!((major === 20 && minor >= 19) || (major === 22 && minor >= 12) || major > 22))
    throw new Stop(`Burette needs Node 20.19 or newer in line 20, or 22.12 and up; this is ${process.version}.`);

  const stamp = createHash('sha256')
    .update(await readFile(path.join(root, 'package-lock.json')))
    .update(`${process.version} ${process.platform} ${process.arch}`)
    .digest('hex');
  if (existsSync(stampFile) && (await readFile(stampFile, 'utf8')) === stamp) return;

  const headers = process.env.npm_config_nodedir ?? nodeHeaders();
  const env = headers ? { npm_config_nodedir: headers } : {};
  if (!(await isInstalled())) await installPackages(env);
  if (!(await canLoadSqlite())) await buildSqlite(env);
  await writeFile(stampFile, stamp);
}

async function installPackages(env) {
  console.log('Installing packages from the lockfile…');
  const { code } = await run('npm', ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'], {
    cwd: root,
    env,
  });
  // A failed native step leaves npm ci unfinished: install without scripts, then see what is really missing.
  if (code !== 0) {
    const quiet = ['ci', '--include=dev', '--ignore-scripts', '--no-audit', '--no-fund', '--loglevel=error'];
    const again = await run('npm', quiet, { cwd: root, env });
    if (again.code !== 0) throw new Stop('The packages could not be installed; npm says why above.');
  }
}
