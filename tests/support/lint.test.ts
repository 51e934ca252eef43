/** The import-direction rule fails on a planted violation: a rule that cannot fail is not a rule. */
import { execFile } from 'node:child_process';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import path from 'node:path';
import { promisify } from 'node:util';
import { describe, expect, it } from 'vitest';
import { projectRoot } from '@/server/project-root.ts';

const run = promisify(execFile);

async function lintWith(folder: string, source: string): Promise<string> {
  const planted = await mkdtemp(path.join(projectRoot, folder, 'planted-'));
  try {
    await writeFile(path.join(planted, 'violation.ts'), source);
    const depcruise = path.join(projectRoot, 'node_modules/.bin/depcruise');
    await run(depcruise, [planted, '--config', '.dependency-cruiser.cjs'], { cwd: projectRoot });
    return 'no violation';
  } catch (error) {
    return (error as { stdout?: string }).stdout ?? String(error);
  } finally {
    await rm(planted, { recursive: true });
  }
}

describe('the import directions', () => {
  it.each([
    ['src/domain', "import '@/server/env.ts';", 'domain-imports-itself'],
    ['src/engine', "import '@/domain/pricing/price-of.ts';", 'engine-imports-network'],
    ['src/archives', "import '@db/connection.ts';", 'archives-import-pure-code'],
    ['src/components', "import '@db/connection.ts';", 'components-import-pure-code'],
    ['src/pages', "import '@db/connection.ts';", 'pages-do-not-touch-db'],
    ['src/domain', "import 'node:fs';", 'pure-code-has-no-node'],
  ])('refuse a file in %s that says %s', async (folder, source, rule) => {
    expect(await lintWith(folder, source)).toContain(rule);
  });

  it('let a file pass that imports its own layer', async () => {
    expect(await lintWith('src/domain', "import '@/domain/limits.ts';")).toBe('no violation');
  });
});
