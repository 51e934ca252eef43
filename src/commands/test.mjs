// `npm test`: every check. Lint, types, unit and service tests, numerics, browser journeys, faults; ends with one count.
import { mkdir, readFile, rm } from 'node:fs/promises';
import path from 'node:path';
import { build } from './build.mjs';
import { install } from './install.mjs';
import { main, root, run, Stop } from './processes.mjs';
import { ensureChromium, ensureSbmlChecker } from './test-programs.mjs';

const reports = path.join(root, 'node_modules/.cache/burette-tests/reports');
const layers = ['src', 'db', 'workers', 'tests'];
const totals = { passed: 0, failed: 0 };
/** Tests that need the SBML format library. */
const sbmlCheckerTests = 3;

async function step(title, program, args, env = {}) {
  const started = Date.now();
  console.log(`\n— ${title}`);
  const { code } = await run(path.join(root, 'node_modules/.bin', program), args, { cwd: root, env });
  console.log(`  ${code === 0 ? 'done' : 'FAILED'} in ${Math.round((Date.now() - started) / 1000)} s`);
  return code === 0;
}

/** A vitest run; its JSON report is added to the totals. A run without a single test is a failure. */
async function vitest(title, name, args, { env = {}, mayBeMissing = 0 } = {}) {
  const report = path.join(reports, `${name}.json`);
  const ok = await step(
    title,
    'vitest',
    ['run', ...args, '--reporter=default', '--reporter=json', `--outputFile.json=${report}`],
    env,
  );
  const { numPassedTests, numFailedTests, numPendingTests, numTodoTests } = JSON.parse(
    await readFile(report, 'utf8').catch(() => '{}'),
  );
  totals.passed += numPassedTests ?? 0;
  totals.failed += (numFailedTests ?? 0) || (ok ? 0 : 1);
  if (ok && !numPassedTests) throw new Stop(`${title}: no test ran.`);
  const skipped = (numPendingTests ?? 0) + (numTodoTests ?? 0);
  if (ok && skipped > mayBeMissing) throw new Stop(`${title}: ${skipped} tests were skipped.`);
  return ok;
}

await main(async () => {
  await install();
  await rm(reports, { recursive: true, force: true });
  await mkdir(reports, { recursive: true });
  const chromium = await ensureChromium();
  const mayBeMissing = (await ensureSbmlChecker()) ? 0 : sbmlCheckerTests;
  if (mayBeMissing > 0) console.log('NOT RUN: the SBML export checks, since python3-sbml5 could not be had.');
  const outcomes = [
    await step('import directions', 'depcruise', [...layers, '--config', '.dependency-cruiser.cjs']),
    await step('format', 'prettier', ['--check', '--log-level', 'warn', '.']),
    await step('types', 'astro', ['check', '--minimumSeverity', 'warning']),
    await vitest('rules, services and numerics', 'unit', [], { mayBeMissing }),
  ];
  const outDir = await build();
  const env = { CHROMIUM_PATH: chromium, BURETTE_OUT_DIR: outDir };
  outcomes.push(await vitest('journeys in a real browser', 'e2e', ['--config', 'tests/e2e/vitest.config.ts'], { env }));
  const faults = 'faults: the server killed at random moments';
  outcomes.push(await vitest(faults, 'fault', ['--config', 'tests/fault/vitest.config.ts'], { env }));
  console.log(`\n${totals.passed} passed, ${totals.failed} failed`);
  if (outcomes.includes(false)) throw new Stop('Some checks failed; they are marked FAILED above.');
});
