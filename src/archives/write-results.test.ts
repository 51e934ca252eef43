/** The archive of a job: the same bytes however it was cut, every file sound by a reader that is not ours, no word of money. */
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { unzipSync } from 'fflate';
import { parquetReadObjects, parquetSchema, parquetMetadata } from 'hyparquet';
import { SaxesParser } from 'saxes';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { drawnElements } from '@/formats/pdf/draw-svg.ts';
import { makeArchive, textOf, type Files, type MadeArchive } from '@tests/factories/archives.ts';
import { writeResults } from './write-results.ts';

let folder = '';
let made: MadeArchive;
let files: Files;
beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'burette-results-'));
  made = await makeArchive({ folder, replicates: 300, keptTraces: 12 });
  files = unzipSync(await readFile(made.task.archiveFile));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe('the results of a job', () => {
  it('are the same bytes, archive and prefix, in batches of 1, 7, 1000 and mixed ones, and when written again', async () => {
    const bytes = async ({ task }: MadeArchive) => [await readFile(task.archiveFile), await readFile(task.prefixFile)];
    const whole = await bytes(made);
    for (const batchSizes of [[1], [7], [100, 3, 255]]) {
      const cut = await makeArchive({ folder, replicates: 300, keptTraces: 12, batchSizes });
      expect(cut.answer).toEqual(made.answer);
      expect(await bytes(cut)).toEqual(whole);
    }
  });

  it('continue from a prefix that was written before, as an extension does', async () => {
    const { task, answer } = await makeArchive({ folder, replicates: 300, batchSizes: [130, 170] });
    const first = {
      ...task,
      replicates: 130,
      batches: task.batches.slice(0, 1),
      prefixFile: path.join(folder, 'first.batch'),
    };
    const before = await writeResults(first);
    if (before.kind !== 'written') throw new Error('damaged');
    const earlier = { file: first.prefixFile, sha256: before.prefixSha256 };
    expect(await writeResults({ ...task, batches: [earlier, task.batches[1]!] })).toEqual(answer);
  });

  it('are not written from damaged files, which are named', async () => {
    const { task } = await makeArchive({ folder, replicates: 300, batchSizes: [60] });
    await rm(task.batches[1]!.file);
    await writeFile(task.batches[3]!.file, 'something else');
    expect(await writeResults(task)).toEqual({ kind: 'damaged', places: [1, 3] });
  });
});

/** Well-formed XML, or it throws; answers the elements with their attributes. */
function elementsOf(xml: string): { name: string; attributes: Record<string, string> }[] {
  const elements: { name: string; attributes: Record<string, string> }[] = [];
  const parser = new SaxesParser();
  parser.on('opentag', ({ name, attributes }) =>
    elements.push({ name, attributes: attributes as Record<string, string> }),
  );
  parser.on('error', (error) => {
    throw error;
  });
  parser.write(xml).close();
  return elements;
}

describe('the archive', () => {
  it('lists every file in its manifest with a format, the description of the simulation first (OMEX)', () => {
    const contents = elementsOf(textOf(files['manifest.xml'])).filter(({ name }) => name === 'content');
    const locations = contents.map(({ attributes }) => attributes['location']!);
    expect(new Set(locations)).toEqual(new Set(['.', ...Object.keys(files).map((name) => `./${name}`)]));
    expect(locations.length).toBe(new Set(locations).size);
    const master = contents.filter(({ attributes }) => attributes['master'] === 'true');
    expect(master.map(({ attributes }) => attributes['location'])).toEqual(['./simulation.sedml']);
  });

  it('holds traces as Parquet that the reader hyparquet finds equal to the CSV, with whole numbers as INT32', async () => {
    const parquet = files['results/traces.parquet']!.slice().buffer;
    const rows = await parquetReadObjects({ file: parquet });
    const [head, ...lines] = textOf(files['results/traces.csv']).trimEnd().split('\n');
    expect(rows.map((row) => Object.values(row).join(','))).toEqual(lines);
    const columns = parquetSchema(parquetMetadata(parquet)).children.map(({ element }) => [element.name, element.type]);
    expect(columns.map(([name]) => name).join(',')).toBe(head);
    expect(Object.fromEntries(columns)).toMatchObject({
      replicate: 'INT32',
      time: 'DOUBLE',
      X: 'INT32',
      share: 'DOUBLE',
    });
  });

  it('describes the simulation as SED-ML L1V4 with KiSAO’s terms (identifiers as published there)', () => {
    const elements = elementsOf(textOf(files['simulation.sedml']));
    const one = (name: string) => elements.find((element) => element.name === name)!.attributes;
    expect(one('sedML')).toMatchObject({
      xmlns: 'http://sed-ml.org/sed-ml/level1/version4',
      level: '1',
      version: '4',
    });
    expect(one('algorithm')).toEqual({ kisaoID: 'KISAO:0000029' });
    expect(
      elements.filter(({ name }) => name === 'algorithmParameter').map(({ attributes }) => attributes),
    ).toContainEqual({
      kisaoID: 'KISAO:0000488',
      value: '20261201',
    });
    expect(one('uniformTimeCourse')).toMatchObject({
      initialTime: '0',
      outputStartTime: '0',
      outputEndTime: '4',
      numberOfSteps: '8',
    });
    expect(one('model')).toMatchObject({ language: 'urn:sedml:language:sbml.level-3.version-2', source: 'model.xml' });
    expect(one('repeatedTask')).toMatchObject({ resetModel: 'true' });
    expect(one('uniformRange')).toMatchObject({ numberOfSteps: '299' });
    const order = ['listOfSimulations', 'listOfModels', 'listOfTasks', 'listOfDataGenerators', 'listOfOutputs'];
    expect(elements.map(({ name }) => name).filter((name) => order.includes(name))).toEqual(order);
    const species = elementsOf(textOf(files['model.xml'])).filter(({ name }) => name === 'species');
    for (const { attributes } of species)
      expect(textOf(files['simulation.sedml'])).toContain(`sbml:species[@id='${attributes['id']}']`);
  });

  it('draws figures as well-formed SVG of elements that the report can draw too', () => {
    const figures = Object.keys(files).filter((name) => name.startsWith('figures/'));
    expect(figures).toHaveLength(8);
    const known = [...drawnElements, 'svg', 'defs', 'clipPath'];
    for (const name of figures)
      for (const element of elementsOf(textOf(files[name]))) expect(known, name).toContain(element.name);
  });

  it('has a tagged report with its title, language and the job’s date, and figures with words for who cannot see them', () => {
    const report = Buffer.from(files['report.pdf']!).toString('latin1');
    expect(report).toMatch(/^%PDF-1\.7/);
    for (const part of ['/StructTreeRoot', '/MarkInfo', '(en-GB)', '(Ligand turnover)', '(D:20261201093000Z)'])
      expect(report).toContain(part);
    expect(report.match(/\/S \/Figure/g)!.length).toBe(5);
    expect(report.match(/\/Alt \(/g)!.length).toBe(5);
  });

  it('tells nothing of money', () => {
    for (const [name, bytes] of Object.entries(files))
      if (!/\.(pdf|parquet)$/.test(name)) expect(textOf(bytes), name).not.toMatch(/credit|charge|price|invoice/i);
  });
});
