/** Zips read back by the library fflate (an independent reader), in ordinary and in zip64 form, and hostile ones refused. */
import { execFile } from 'node:child_process';
import { mkdtemp, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import { unzipSync, zipSync } from 'fflate';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { signatures } from './zip-records.ts';
import { ZipReader } from './zip-reader.ts';
import { ZipWriter, type ZipOptions } from './zip-writer.ts';

const projectRoot = fileURLToPath(new URL('../../../', import.meta.url));
let folder = '';
beforeAll(async () => (folder = await mkdtemp(path.join(tmpdir(), 'burette-zip-'))));
afterAll(() => rm(folder, { recursive: true, force: true }));

const numbers = (count: number): string => Array.from({ length: count }, (_, i) => (i * 7919) % 10_007).join('\n');
const contents: Record<string, string> = {
  'README.txt': 'Reproduce me – grüße',
  'results/long.csv': numbers(60_000),
  'results/empty.csv': '',
};

async function write(name: string, options: ZipOptions = {}): Promise<{ file: string; bytes: number }> {
  const file = path.join(folder, name);
  const zip = await ZipWriter.create(file, options);
  for (const [entry, text] of Object.entries(contents)) await zip.add(entry, [text.slice(0, 1000), text.slice(1000)]);
  const { bytes } = await zip.end();
  return { file, bytes };
}

const texts = (zip: Uint8Array) =>
  Object.fromEntries(Object.entries(unzipSync(zip)).map(([name, bytes]) => [name, new TextDecoder().decode(bytes)]));

const readAll = async (file: string): Promise<Record<string, string>> => {
  const reader = await ZipReader.open(file);
  try {
    const read: Record<string, string> = {};
    for (const name of reader.entries.keys()) read[name] = await reader.text(name);
    return read;
  } finally {
    await reader.close();
  }
};

describe('a zip', () => {
  it('holds what was put in, whether an entry waits in memory or in a file, and leaves no file behind', async () => {
    const inMemory = await write('memory.zip');
    const spooled = await write('spooled.zip', { spoolBytes: 1_000 });
    const bytes = await readFile(inMemory.file);
    expect(bytes.byteLength).toBe(inMemory.bytes);
    expect(texts(bytes)).toEqual(contents);
    expect(await readFile(spooled.file)).toEqual(bytes);
    expect((await readdir(folder)).filter((name) => name.includes('spool.tmp'))).toEqual([]);
    expect(await readAll(inMemory.file)).toEqual(contents);
  });

  it('is zip64 where a size, an offset or the directory is too large for 32 bits', async () => {
    const plain = await readFile((await write('plain.zip')).file);
    const { file } = await write('zip64.zip', { zip64From: 100 });
    const large = await readFile(file);
    const end64 = Buffer.alloc(4);
    end64.writeUInt32LE(signatures.end64);
    expect(large.includes(end64)).toBe(true);
    expect(plain.includes(end64)).toBe(false);
    expect(texts(large)).toEqual(contents);
    expect(await readAll(file)).toEqual(contents);
  });
});

describe('a hostile zip', () => {
  const refused = async (bytes: Uint8Array): Promise<string> => {
    const file = path.join(folder, 'hostile.zip');
    await writeFile(file, bytes);
    return readAll(file).then(
      () => 'accepted',
      (error: Error) => `${error.constructor.name}: ${error.message}`,
    );
  };
  const zeros = new Uint8Array(1_000_000);

  it('is refused in a sentence when an entry’s path leads outside', async () => {
    for (const name of ['../outside', '/etc/passwd', 'a/../../b', 'C:\\temp', 'a\\..\\b'])
      expect(await refused(zipSync({ [name]: zeros }))).toMatch(/ZipError: .*leads outside/);
  });

  it('is refused when cut anywhere', async () => {
    const whole = zipSync({ 'a.txt': new TextEncoder().encode(numbers(500)) });
    for (const length of [0, 10, 21, 22, 100, whole.length - 30, whole.length - 1])
      expect(await refused(whole.slice(0, length))).toMatch(/^ZipError: /);
  });

  it('is refused when it inflates to more than it says, or to other bytes', async () => {
    const bomb = Buffer.from(zipSync({ 'bomb.csv': zeros }));
    const directory = bomb.indexOf(Buffer.from([0x50, 0x4b, 0x01, 0x02]));
    bomb.writeUInt32LE(1_000, directory + 24);
    expect(await refused(bomb)).toMatch(/ZipError: bomb.csv is longer than the archive says/);
    bomb.writeUInt32LE(0xfffffff0, directory + 24);
    expect(await refused(bomb)).toMatch(/ZipError: .*claims a size/);
    const flipped = Buffer.from(zipSync({ 'a.csv': [zeros, { level: 0 }] }));
    flipped[200]! ^= 1;
    expect(await refused(flipped)).toMatch(/ZipError: a.csv is damaged/);
  });

  it('never leaves the reader without a sentence, whichever single byte of it is wrong', async () => {
    const whole = Buffer.from(zipSync({ 'a.txt': new TextEncoder().encode(numbers(40)), 'b.txt': zeros.slice(0, 50) }));
    const outcomes = new Set<string>();
    for (let at = 0; at < whole.length; at++) {
      const changed = Buffer.from(whole);
      changed[at]! ^= 0xff;
      const outcome = await refused(changed);
      expect(outcome, `byte ${at}`).toMatch(/^(accepted$|ZipError: )/);
      outcomes.add(outcome);
    }
    expect(outcomes.size).toBeGreaterThan(5);
  });
});

describe('a large zip', () => {
  it('is written in less than 200 MB of memory: 200 MB of it here, 2 GB by hand', async () => {
    const file = path.join(folder, 'large.zip');
    const script = path.join(projectRoot, 'tests/support/write-large-zip.ts');
    const { stdout } = await promisify(execFile)(process.execPath, ['--import', 'tsx', script, file, '200'], {
      cwd: projectRoot,
    });
    const { bytes, peakMegabytes } = JSON.parse(stdout) as { bytes: number; peakMegabytes: number };
    expect(bytes).toBeGreaterThan(200 * 2 ** 20);
    // The process alone takes about 110 MB; one that kept the zip would pass 300.
    expect(peakMegabytes).toBeLessThan(200);
  }, 120_000);
});
