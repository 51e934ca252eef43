// The programs that tests use beside npm's: Chromium for the journeys, and the SBML format library as an outside check.
// Both are Debian's and are installed where apt works and we may.
import { existsSync } from 'node:fs';
import { isPresent, run, Stop } from './processes.mjs';

const places = [
  '/usr/bin/chromium',
  '/usr/bin/chromium-browser',
  '/usr/bin/google-chrome',
  '/Applications/Chromium.app/Contents/MacOS/Chromium',
];

/** Installs a Debian package; what went wrong is the caller's to find out by looking for what it brings. */
async function installFromDebian(name) {
  if (process.getuid?.() !== 0 || !(await isPresent('apt-get'))) return;
  console.log(`Installing ${name} from Debian…`);
  await run('apt-get', ['update'], { capture: true });
  const { code, output } = await run('apt-get', ['install', '-y', '--no-install-recommends', name], {
    capture: true,
    env: { DEBIAN_FRONTEND: 'noninteractive' },
  });
  if (code !== 0) console.error(output.split('\n').slice(-10).join('\n'));
}

/** Where Chromium is. The journeys are part of the checks, so without it there is no passing. */
export async function ensureChromium() {
  const given = process.env.CHROMIUM_PATH;
  if (given) {
    if (!existsSync(given)) throw new Stop(`CHROMIUM_PATH is ${given}, where there is no program.`);
    return given;
  }
  const find = () => places.find((place) => existsSync(place));
  if (!find()) await installFromDebian('chromium');
  const found = find();
  if (found) return found;
  throw new Stop(
    'The browser journeys need Chromium. Install it (on Debian or Ubuntu, as root: apt-get install -y chromium) or set CHROMIUM_PATH to one, then run npm test again.',
  );
}

/** Whether the SBML format library can check our exports; without it those tests do not run, and `npm test` says so. */
export async function ensureSbmlChecker() {
  const present = async () => {
    for (const python of ['/usr/bin/python3', 'python3']) {
      try {
        if ((await run(python, ['-c', 'import libsbml'], { capture: true })).code === 0) return true;
      } catch {
        // No such python.
      }
    }
    return false;
  };
  if (await present()) return true;
  await installFromDebian('python3-sbml5');
  return present();
}
