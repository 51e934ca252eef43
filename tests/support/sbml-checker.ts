/** The standard's own format library as an outside check of exports, where it is installed (`apt-get install python3-sbml5`). */
import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';

export interface SbmlFinding {
  id: number;
  severity: string;
  line: number;
  message: string;
}

const script = fileURLToPath(new URL('./check_sbml.py', import.meta.url));

function runs(python: string): boolean {
  return spawnSync(python, ['-c', 'import libsbml'], { stdio: 'ignore' }).status === 0;
}

/** The Python that has the library, or null. Debian's own comes first: it is where the package puts it. */
const python = ['/usr/bin/python3', 'python3'].find(runs) ?? null;

/** Findings for each text, or null where the library is not installed. */
export const checkSbml: ((texts: string[]) => SbmlFinding[][]) | null =
  python === null
    ? null
    : (texts) => {
        const run = spawnSync(python, [script], {
          input: JSON.stringify(texts),
          encoding: 'utf8',
          maxBuffer: 100_000_000,
        });
        if (run.status !== 0) throw new Error(`the SBML checker failed: ${run.stderr}`);
        return JSON.parse(run.stdout) as SbmlFinding[][];
      };
