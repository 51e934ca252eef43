// Runs other programs for the commands: to the end with a clear failure, or beside us until we stop.
import { spawn } from 'node:child_process';

/**
 * Runs a program to its end; resolves to its exit code and, when `capture` is set, what it printed.
 * @param {string} program
 * @param {string[]} args
 * @param {{ cwd?: string, env?: Record<string, string | undefined>, capture?: boolean }} [options]
 * @returns {Promise<{ code: number, output: string }>}
 */
export function run(program, args, options = {}) {
  return new Promise((resolve, reject) => {
    const child = spawn(program, args, {
      cwd: options.cwd,
      env: { ...process.env, ...options.env },
      stdio: options.capture ? ['ignore', 'pipe', 'pipe'] : ['ignore', 'inherit', 'inherit'],
    });
    let output = '';
    child.stdout?.on('data', (chunk) => (output += chunk));
    child.stderr?.on('data', (chunk) => (output += chunk));
    child.once('error', reject);
    child.once('close', (code, signal) => resolve({ code: code ?? (signal ? 1 : 0), output }));
  });
}

/** Whether a program can be started at all. */
export async function isPresent(program) {
  try {
    await run(program, ['--version'], { capture: true });
    return true;
  } catch {
    return false;
  }
}

/** A sentence for the person at the shell; the stack would not help them. */
export class Stop extends Error {}

/** Runs a command's main function; a `Stop` prints its sentence, anything else its stack. */
export async function main(work) {
  try {
    await work();
  } catch (error) {
    console.error(error instanceof Stop ? `\n${error.message}` : error);
    process.exit(1);
  }
}

export const root = new URL('../..', import.meta.url).pathname.replace(/\/$/, '');
