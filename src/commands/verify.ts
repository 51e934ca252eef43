/**
 * `npm run verify -- archive.zip [--blocks N | --blocks all]`: checks an archive without the service that made it.
 *
 * Exits 0 when everything agrees, 1 when something differs (each difference on a line of its own), 2 when called wrongly.
 */
import { randomInt } from 'node:crypto';
import { existsSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { chanceOfFinding } from '@/archives/verify/chance-of-finding.ts';
import { verifyArchive } from '@/archives/verify/verify-archive.ts';

const usage = 'Usage: npm run verify -- archive.zip [--blocks N | --blocks all]';
const standardBlocks = 3;

/** `count` of 0 … blocks − 1, all sets equally likely, by the system's randomness: whoever altered a block cannot know which. */
function choose(count: number, blocks: number): number[] {
  const left = Array.from({ length: blocks }, (_, place) => place);
  return Array.from({ length: Math.min(count, blocks) }, () => left.splice(randomInt(left.length), 1)[0]!);
}

function readArguments(): { file: string; count: number } | null {
  try {
    const { values, positionals } = parseArgs({ options: { blocks: { type: 'string' } }, allowPositionals: true });
    const { blocks = String(standardBlocks) } = values;
    const [file] = positionals;
    if (!file || positionals.length > 1 || !/^(all|\d{1,9})$/.test(blocks)) return null;
    return { file, count: blocks === 'all' ? Infinity : Number(blocks) };
  } catch {
    return null;
  }
}

const percent = (share: number): string => `${(100 * share).toFixed(1)} %`;

async function main(): Promise<number> {
  const given = readArguments();
  if (!given || !existsSync(given.file)) {
    console.error(given ? `There is no file ${given.file}.` : usage);
    return 2;
  }
  const report = await verifyArchive({
    file: given.file,
    choose: (blocks) => choose(given.count, blocks),
    onBlock: (place) => console.error(`Running block ${place} again …`),
  });
  for (const line of report.checked) console.log(line);
  for (const line of report.problems) console.error(`DIFFERS  ${line}`);
  if (report.blocks > 0) {
    const chance = (altered: number) =>
      percent(chanceOfFinding({ blocks: report.blocks, chosen: report.reRun, altered }));
    console.log(
      `A block altered together with its sums and every checksum would be found by running it again. Of ${report.blocks} blocks ` +
        `${report.reRun} were: one altered block would have been found with probability ${chance(1)}` +
        (report.blocks >= 10 ? `, a tenth of all blocks with ${chance(Math.ceil(report.blocks / 10))}.` : '.'),
    );
  }
  console.log(report.problems.length === 0 ? 'The archive holds.' : `${report.problems.length} differences.`);
  return report.problems.length === 0 ? 0 : 1;
}

process.exitCode = await main();
