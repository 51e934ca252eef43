/** `verify` passes what we wrote, finds each kind of alteration by name, and answers hostile files in sentences. */
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { unzipSync, zipSync } from 'fflate';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { bytesOf, forged, makeArchive, textOf, type Files } from '@tests/factories/archives.ts';
import { chanceOfFinding } from './chance-of-finding.ts';
import type { Sweep } from '@/domain/jobs/sweep.ts';
import { verifyArchive, type VerifyReport } from './verify-archive.ts';

let folder = '';
let zip: Uint8Array;
/** Three blocks: replicates 0 to 255, 256 to 511, 512 to 599. */
const replicates = 600;

beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'burette-verify-'));
  const { task } = await makeArchive({ folder, replicates, batchSizes: [250] });
  zip = await readFile(task.archiveFile);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

async function verify(bytes: Uint8Array, places: number[] = [0, 1, 2]): Promise<VerifyReport> {
  const file = path.join(folder, 'checked.zip');
  await writeFile(file, bytes);
  return verifyArchive({ file, choose: () => places });
}

/** Changes the cells of one row of a table. `find` must hold for a row. */
function change(
  files: Files,
  table: string,
  find: (cells: string[]) => boolean,
  alter: (cells: string[]) => void,
): void {
  const name = `results/${table}.csv`;
  const rows = textOf(files[name])
    .split('\n')
    .map((row) => row.split(','));
  const row = rows.find(find);
  if (!row) throw new Error(`no such row in ${table}`);
  alter(row);
  files[name] = bytesOf(rows.map((cells) => cells.join(',')).join('\n'));
}

describe('an archive as it was written', () => {
  it('holds, whether no block is run again, one, or all', async () => {
    for (const places of [[], [2], [0, 1, 2]]) {
      const report = await verify(zip, places);
      expect(report).toMatchObject({ problems: [], blocks: 3, reRun: places.length });
    }
    expect((await verify(zip)).checked.join(' ')).toMatch(/135 numbers of summary.csv.* every byte agrees/s);
  });

  it('holds after it was packed anew by another program', async () => {
    expect((await verify(zipSync(unzipSync(zip)))).problems).toEqual([]);
  });
});

describe('an altered archive, its checksums made to fit', () => {
  it('is found by re-adding when any number of the summary is another', async () => {
    for (const column of [3, 4, 5, 6, 7])
      for (const observable of ['X', 'share']) {
        const altered = forged(zip, (files) =>
          change(
            files,
            'summary',
            ([, id, time]) => id === observable && time === '2',
            (cells) => (cells[column] = String(Number(cells[column]) + 0.001)),
          ),
        );
        const { problems } = await verify(altered, []);
        expect(problems).toHaveLength(1);
        expect(problems[0]).toMatch(new RegExp(`results/summary.csv: .* of ${observable} at 2 is .* the blocks give`));
      }
  });

  it('is found by re-adding when an event count, a histogram or a quantile is another', async () => {
    const plusOne = (column: number) => (cells: string[]) => void (cells[column] = String(Number(cells[column]) + 1));
    const eventsAltered = forged(zip, (files) => change(files, 'events', ([, id]) => id === '300', plusOne(2)));
    expect((await verify(eventsAltered, [])).problems).toEqual([
      expect.stringMatching(/events.csv: the block from replicate 256/),
    ]);
    const histogramAltered = forged(zip, (files) => {
      change(files, 'histograms', ([, id, time]) => id === 'X' && time === '4', plusOne(5));
    });
    expect((await verify(histogramAltered, [])).problems.join()).toMatch(/histograms.csv: X,4 holds 601 replicates/);
    const quantileAltered = forged(zip, (files) =>
      change(files, 'quantiles', ([, id, t]) => id === 'X' && t === '4', plusOne(5)),
    );
    expect((await verify(quantileAltered, [])).problems).toEqual([
      expect.stringMatching(/quantiles.csv: 0.5 of X at 4/),
    ]);
  });

  /** Adds one molecule to the sum of X at 4 in the second block and makes summary.csv follow: re-adding cannot notice. */
  const withAlteredBlock = () =>
    forged(zip, (files) => {
      const isCell = ([, , id, time]: string[]) => id === 'Y' && time === '0';
      change(
        files,
        'block-sums',
        (cells) => cells[1] === '256' && isCell(cells),
        (cells) => void [4, 5, 6, 7].forEach((column) => (cells[column] = '1')),
      );
      const [n, mean] = [replicates, 1 / replicates];
      const sd = Math.sqrt((1 - mean) / (n - 1));
      change(
        files,
        'summary',
        ([, id, time]) => id === 'Y' && time === '0',
        (cells) => void cells.splice(4, 3, String(mean), String(sd / Math.sqrt(n)), String(sd)),
      );
    });

  it('is found by running the altered block again, and named, and not by running others', async () => {
    const altered = withAlteredBlock();
    const found = await verify(altered, [1]);
    expect(found.problems).toContainEqual(
      'Run again, the block of replicates 256 to 511 has other sums, first of Y at 0.',
    );
    const missed = await verify(altered, [0, 2]);
    expect(missed.problems.filter((text) => text.startsWith('Run again'))).toEqual([]);
  });

  it('is found by running again when a digest, two events of one block, or a trace is another', async () => {
    const digestAltered = forged(zip, (files) =>
      change(
        files,
        'blocks',
        ([, first]) => first === '512',
        (cells) => (cells[4] = 'a'.repeat(64)),
      ),
    );
    expect((await verify(digestAltered, [])).problems).toEqual([]);
    expect((await verify(digestAltered, [2])).problems).toEqual([
      expect.stringMatching(/replicates 512 to 599 has the digest/),
    ]);
    const shift = (by: number) => (cells: string[]) => void (cells[2] = String(Number(cells[2]) + by));
    const eventsAltered = forged(zip, (files) => {
      change(files, 'events', ([, id]) => id === '3', shift(1));
      change(files, 'events', ([, id]) => id === '4', shift(-1));
    });
    expect((await verify(eventsAltered, [])).problems).toEqual([]);
    expect((await verify(eventsAltered, [0])).problems).toEqual([expect.stringMatching(/replicate 3 has \d+ events/)]);
    const traceAltered = forged(zip, (files) =>
      change(
        files,
        'traces',
        ([, id, t]) => id === '1' && t === '2',
        (cells) => (cells[3] = '0'),
      ),
    );
    expect((await verify(traceAltered, [0])).problems).toEqual([
      expect.stringMatching(/replicate 1 has another trace/),
    ]);
  });

  it('is found by running all blocks again when a table that re-adding does not read is another', async () => {
    const altered = forged(zip, (files) => {
      files['results/traces.parquet']![100]! ^= 1;
    });
    expect((await verify(altered, [0, 1])).problems).toEqual([]);
    expect((await verify(altered)).problems).toEqual([
      expect.stringMatching(/results\/traces.parquet has other bytes/),
    ]);
  });

  it('is found by its digest of the model when the model or the job is another', async () => {
    const model = forged(zip, (files) => {
      files['model.json'] = bytesOf(textOf(files['model.json']).replace('"value":20', '"value":21'));
    });
    expect((await verify(model, [0])).problems.join('\n')).toMatch(/model.json is not the model[\s\S]*has the digest/);
    const passage = forged(zip, (files) => {
      files['job.json'] = bytesOf(textOf(files['job.json']).replace('"threshold": 12', '"threshold": 13'));
    });
    expect((await verify(passage, [0])).problems.join('\n')).toMatch(/has the digest/);
    const seed = forged(zip, (files) => {
      files['job.json'] = bytesOf(textOf(files['job.json']).replace('"20261201"', '"20261202"'));
    });
    expect((await verify(seed, [0])).problems.join('\n')).toMatch(/has the digest/);
  });
});

describe('an archive with correlations', () => {
  const correlations = ['X', 'Y'];

  it('holds, its tables the same for any batches', async () => {
    const { task } = await makeArchive({ folder, replicates, batchSizes: [250], correlations });
    const ofBatches = await readFile(task.archiveFile);
    const report = await verify(ofBatches);
    expect(report.problems).toEqual([]);
    expect(report.checked.join(' ')).toMatch(/36 numbers of covariances.csv.* every byte agrees/s);
    const other = await makeArchive({ folder, replicates, batchSizes: [77, 300], correlations });
    const [first, second] = [ofBatches, await readFile(other.task.archiveFile)].map((bytes) => unzipSync(bytes));
    for (const table of ['covariances', 'block-cross-sums', 'blocks'])
      expect(textOf(second![`results/${table}.csv`])).toBe(textOf(first![`results/${table}.csv`]));
  });

  it('is found altered: a covariance and a correlation by re-adding, a sum by running its block again', async () => {
    const { task } = await makeArchive({ folder, replicates, batchSizes: [600], correlations });
    const whole = await readFile(task.archiveFile);
    const last = (cells: string[]) => cells[1] === 'X' && cells[3] === '4';
    for (const column of [4, 5, 6, 7]) {
      const altered = forged(whole, (files) => change(files, 'covariances', last, (cells) => (cells[column] += '1')));
      expect((await verify(altered, [])).problems).toEqual([
        expect.stringMatching(/of X and Y at 4 it has .* the blocks/),
      ]);
    }
    const sumAltered = forged(whole, (files) =>
      change(
        files,
        'block-cross-sums',
        ([, first]) => first === '256',
        (cells) => (cells[10] = String(Number(cells[10]) + 1)),
      ),
    );
    expect((await verify(sumAltered, [1])).problems.join()).toMatch(/256 to 511 has other sums of products/);
  });
});

describe('an archive whose checksums do not fit', () => {
  it('is named file by file', async () => {
    const files = unzipSync(zip);
    files['README.txt'] = bytesOf('Something else');
    files['extra.txt'] = bytesOf('More');
    delete files['provenance.json'];
    expect((await verify(zipSync(files), [])).problems).toEqual([
      'README.txt is not the file whose checksum SHA256SUMS has.',
      'extra.txt is not in SHA256SUMS.',
      'provenance.json stands in SHA256SUMS and is missing.',
    ]);
  });
});

describe('a hostile file', () => {
  it('gives one clear sentence: no zip, cut short, paths that lead outside, a bomb', async () => {
    const bomb = Buffer.from(zipSync({ SHA256SUMS: new Uint8Array(1_000_000) }));
    bomb.writeUInt32LE(0xfffffff0, bomb.indexOf(Buffer.from([0x50, 0x4b, 0x01, 0x02])) + 24);
    const cases: [Uint8Array, RegExp][] = [
      [bytesOf('not a zip at all, only text'), /no zip archive/],
      [zip.slice(0, zip.length - 40), /cut short|damaged/],
      [zipSync({ '../outside': bytesOf('x') }), /leads outside/],
      [bomb, /claims a size/],
      [zipSync({ SHA256SUMS: bytesOf('rubbish\n') }), /no checksum/],
      [zipSync({ 'a.txt': bytesOf('x') }), /has no SHA256SUMS/],
    ];
    for (const [bytes, sentence] of cases) {
      const { problems } = await verify(bytes);
      expect(problems).toEqual([expect.stringMatching(sentence)]);
    }
  });

  it('gives one clear sentence: a job.json that is none, or asks for the impossible', async () => {
    const job = (alter: (job: Record<string, unknown>) => void) =>
      forged(zip, (files) => {
        const content = JSON.parse(textOf(files['job.json'])) as Record<string, unknown>;
        alter(content);
        files['job.json'] = bytesOf(JSON.stringify(content));
      });
    const cases: [Uint8Array, RegExp][] = [
      [job((content) => (content['format'] = 'another')), /job.json is not what it should be: format/],
      [job((content) => (content['horizon'] = -1)), /horizon/],
      [job((content) => (content['replicates'] = 1e15)), /replicates/],
      [job((content) => (content['gridIntervals'] = 7)), /results\/block-sums.csv/],
      [job((content) => (content['seed'] = '99999999999999999999')), /cannot be run again: a seed is at most/],
      [job((content) => (content['horizon'] = 1e300)), /./],
      [
        job((content) => (content['passages'] = [{ observable: 'none', direction: 'rises_to', threshold: 1 }])),
        /cannot be run again: .*passage/,
      ],
      [job((content) => (content['engineVersion'] = 'other')), /cannot be run again: other made them/],
      [job((content) => (content['overrides'] = { parameters: { unknown: 1 } })), /model cannot run/],
    ];
    for (const [bytes, sentence] of cases) expect((await verify(bytes)).problems.join('\n')).toMatch(sentence);
  });

  it('gives a sentence whichever byte of a table is wrong', async () => {
    for (const table of ['summary', 'blocks', 'block-sums', 'histograms', 'quantiles', 'events'])
      for (let at = 0; at < 280; at += 37) {
        const altered = forged(zip, (files) => {
          files[`results/${table}.csv`]![at]! ^= 5;
        });
        expect((await verify(altered)).problems.length, `${table} ${at}`).toBeGreaterThan(0);
      }
  }, 60_000);
});

describe('the chance of finding an altered block', () => {
  it('is one less the hypergeometric probability of meeting none', () => {
    expect(chanceOfFinding({ blocks: 40, chosen: 3, altered: 1 })).toBeCloseTo(3 / 40, 15);
    // C(8, 3) / C(10, 3) = 56 / 120.
    expect(chanceOfFinding({ blocks: 10, chosen: 3, altered: 2 })).toBeCloseTo(1 - 56 / 120, 15);
    expect(chanceOfFinding({ blocks: 10, chosen: 10, altered: 1 })).toBe(1);
    expect(chanceOfFinding({ blocks: 10, chosen: 0, altered: 1 })).toBe(0);
  });
});

describe('an archive of a sweep', () => {
  const sweep: Sweep = {
    kind: 'list',
    targets: [{ kind: 'parameter', id: 'birth' }],
    values: [[5], [20], [40]],
  };
  let ofSweep: Uint8Array;
  beforeAll(async () => {
    const { task } = await makeArchive({ folder, replicates: 300, batchSizes: [110, 70], keptTraces: 2, sweep });
    ofSweep = await readFile(task.archiveFile);
  });

  it('has every table by point and holds, run again in part or whole; other batches give the same results', async () => {
    const files = unzipSync(ofSweep);
    expect(textOf(files['results/points.csv'])).toBe('point,birth\n0,5\n1,20\n2,40\n');
    // Blocks of 256 and 44 replicates at each of three points.
    for (const places of [[], [3], [0, 1, 2, 3, 4, 5]])
      expect(await verify(ofSweep, places)).toMatchObject({ problems: [], blocks: 6, reRun: places.length });
    expect((await verify(ofSweep, [0, 1, 2, 3, 4, 5])).checked.join()).toMatch(/every byte agrees/);
    const other = await makeArchive({ folder, replicates: 300, batchSizes: [300], keptTraces: 2, sweep });
    const again = unzipSync(await readFile(other.task.archiveFile));
    for (const name of Object.keys(files).filter((each) => each.startsWith('results/')))
      expect(textOf(again[name]), name).toBe(textOf(files[name]));
  });

  it('is found out when a number, a point or a block of a later point is another', async () => {
    const summary = forged(ofSweep, (files) =>
      change(
        files,
        'summary',
        ([point, id, time]) => point === '2' && id === 'X' && time === '4',
        (cells) => (cells[4] = '39'),
      ),
    );
    expect((await verify(summary, [])).problems.join()).toMatch(/mean of X at 4 is 39/);
    const swapped = forged(ofSweep, (files) => {
      const job = JSON.parse(textOf(files['job.json'])) as { sweep: Sweep };
      job.sweep.values[1] = [21];
      files['job.json'] = bytesOf(JSON.stringify(job));
    });
    expect((await verify(swapped, [2])).problems.join()).toMatch(
      /block of replicates 0 to 255 of point 1 has the digest/,
    );
    const events = forged(ofSweep, (files) =>
      change(
        files,
        'events',
        ([point, replicate]) => point === '1' && replicate === '299',
        (cells) => (cells[2] = String(Number(cells[2]) + 1)),
      ),
    );
    expect((await verify(events, [])).problems.join()).toMatch(/block from replicate 256 has/);
  });
});
