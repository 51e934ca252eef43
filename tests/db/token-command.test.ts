/** `npm run token`: one line that is a working token, or a sentence; beside an open database, migrating nothing. */
import { execFile } from 'node:child_process';
import { promisify } from 'node:util';
import { describe, expect, it } from 'vitest';
import { projectRoot } from '@/server/project-root.ts';
import { makeTeam } from '../factories/people.ts';
import { callEndpoint } from '../support/call-endpoint.ts';
import { useTestDatabase } from '../support/test-database.ts';

const { folder } = useTestDatabase();

async function run(...given: string[]): Promise<{ code: number; stdout: string; stderr: string }> {
  const command = promisify(execFile)(process.execPath, ['--import', 'tsx', 'src/commands/token.ts', ...given], {
    cwd: projectRoot,
    env: { ...process.env, NODE_ENV: 'test', BURETTE_DATA_DIR: folder(), LOG_LEVEL: 'silent' },
  });
  return command.then(
    ({ stdout, stderr }) => ({ code: 0, stdout, stderr }),
    (error: { code: number; stdout: string; stderr: string }) => error,
  );
}

describe('npm run token', () => {
  it('prints only a token, which then works', async () => {
    const { team, people } = await makeTeam();
    const { code, stdout, stderr } = await run('--email', people.modeller.email.toUpperCase(), '--team', team.slug);
    expect([code, stderr]).toEqual([0, '']);
    expect(stdout).toMatch(/^burette_[\w-]{43}\n$/);
    const headers = { Authorization: `Bearer ${stdout.trim()}` };
    const answer = await callEndpoint({ path: `/api/v1/teams/${team.slug}`, headers });
    expect(answer.status).toBe(200);
  });

  it('says in a sentence what is missing and prints nothing else', async () => {
    const { team, people } = await makeTeam();
    const other = await makeTeam();
    const tries: [string[], RegExp][] = [
      [
        ['--email', 'nobody@people.example', '--team', team.slug],
        /^Nobody signs in as nobody@people\.example here\.\n$/,
      ],
      [['--email', people.owner.email, '--team', 'nowhere'], /^There is no team nowhere here\.\n$/],
      [['--email', people.owner.email, '--team', other.team.slug], /is not a member of/],
      [['--email', people.owner.email], /^Usage: /],
    ];
    for (const [given, sentence] of tries) {
      const { code, stdout, stderr } = await run(...given);
      expect([code, stdout]).toEqual([1, '']);
      expect(stderr).toMatch(sentence);
    }
  });
});
