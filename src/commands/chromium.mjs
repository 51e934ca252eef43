// Finds a Chromium for the browser journeys; installs Debian's where apt works and we may, else says how to.
import { existsSync } from 'node:fs';
import { isPresent, run, Stop } from './processes.mjs';

const places = [
  '/usr/bin/chromium',
  '/usr/bin/chromium-browser',
  '/usr/bin/google-chrome',
  '/Applications/Chromium.app/Contents/MacOS/Chromium',
];

export async function ensureChromium() {
  const given = process.env.CHROMIUM_PATH;
  if (given) {
    if (!existsSync(given)) throw new Stop(`CHROMIUM_PATH is ${given}, where there is no program.`);
    return given;
  }
  const found = () => places.find((place) => existsSync(place));
  if (found()) return found();
  const root = process.getuid?.() === 0;
  if (root && (await isPresent('apt-get'))) {
    console.log('Installing Chromium from Debian for the browser journeys…');
    await run('apt-get', ['update'], { capture: true });
    const { output } = await run('apt-get', ['install', '-y', '--no-install-recommends', 'chromium'], {
      capture: true,
      env: { DEBIAN_FRONTEND: 'noninteractive' },
    });
    if (found()) return found();
    console.error(output.split('\n').slice(-10).join('\n'));
  }
  throw new Stop(
    'The browser journeys need Chromium. Install it (on Debian or Ubuntu, as root: apt-get install -y chromium) or set CHROMIUM_PATH to one, then run npm test again.',
  );
}
