/** Models and versions through their services, on real SQLite. */
import { describe, expect, it } from 'vitest';
import { database } from '@db/connection.ts';
import { bistableSwitch, demoModels, enzyme } from '@db/seeds/demo-models.ts';
import { limits } from '@/domain/limits.ts';
import { createModel } from '@/server/network/create-model.ts';
import { exportSbml } from '@/server/network/export-sbml.ts';
import { importSbml } from '@/server/network/import-sbml.ts';
import { listModels } from '@/server/network/list-models.ts';
import { readVersion } from '@/server/network/read-version.ts';
import { saveVersion } from '@/server/network/save-version.ts';
import { makeTeam } from '@tests/factories/people.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();

async function storedEnzyme() {
  const { actors, team } = await makeTeam();
  const created = await createModel({ actor: actors.modeller, team: team.slug, ...enzyme });
  if (!created.ok) throw new Error(created.detail);
  return { actors, team: team.slug, model: created.value.model.id, created: created.value };
}

describe('storing a model', () => {
  it('makes version 1, hashes its content and tells what the checks found', async () => {
    const { created } = await storedEnzyme();
    expect(created.version.number).toBe(1);
    expect(created.version.contentHash).toMatch(/^[0-9a-f]{64}$/);
    expect(created.problems.map(({ code }) => code)).toContain('conserved_total');
  });

  it('refuses an unknown species in a law with the cell and stores nothing', async () => {
    const { actors, team } = await storedEnzyme();
    const network = structuredClone(bistableSwitch.network);
    network.reactions[1]!.rateLaw = { kind: 'expression', expression: 'leak + b_max / (1 + (Aa / K)^n)' };
    const refused = await createModel({ actor: actors.modeller, team, name: 'Broken', network });
    expect(refused).toMatchObject({ ok: false, code: 'invalid_network' });
    if (!refused.ok) expect(refused.errors?.[0]?.path).toBe('network.reactions[1].rateLaw.expression');
    const listed = await listModels({ actor: actors.modeller, team });
    expect(listed.ok && listed.value.models.map(({ name }) => name)).toEqual([enzyme.name]);
  });

  it('refuses a negative count, and 100,000 reactions with the limit in words', async () => {
    const { actors, team } = await storedEnzyme();
    const negative = structuredClone(enzyme.network);
    negative.species[0]!.initialCount = -1;
    expect(await createModel({ actor: actors.modeller, team, name: 'Negative', network: negative })).toMatchObject({
      ok: false,
      code: 'invalid_network',
    });
    const huge = structuredClone(enzyme.network);
    huge.reactions = Array.from({ length: 100_000 }, (_, index) => ({
      ...enzyme.network.reactions[0]!,
      id: `r${index}`,
    }));
    const refused = await createModel({ actor: actors.modeller, team, name: 'Huge', network: huge });
    expect(refused).toMatchObject({ ok: false, code: 'invalid_network' });
    if (!refused.ok) expect(refused.errors?.[0]?.message).toContain(limits.reactionsPerNetwork.toLocaleString('en'));
  });
});

describe('saving versions', () => {
  it('numbers them, answers an unchanged network with the latest, and refuses a stale basis', async () => {
    const { actors, team, model } = await storedEnzyme();
    const actor = actors.modeller;
    const changed = structuredClone(enzyme.network);
    changed.species[0]!.initialCount = 13;
    const second = await saveVersion({ actor, team, model, network: changed, basedOn: 1 });
    expect(second.ok && second.value.version.number).toBe(2);
    const again = await saveVersion({ actor, team, model, network: changed, basedOn: 2 });
    expect(again.ok && again.value.version.number).toBe(2);
    const stale = await saveVersion({ actor, team, model, network: enzyme.network, basedOn: 1 });
    expect(stale).toMatchObject({ ok: false, code: 'version_conflict' });
  });

  it('cannot change or remove a stored version even by SQL', async () => {
    const { created } = await storedEnzyme();
    const act = (sql: string) => database().query(sql, { replacements: { id: created.version.id } });
    await expect(act(`UPDATE modelVersions SET note = 'other' WHERE id = :id`)).rejects.toThrow();
    await expect(act('DELETE FROM modelVersions WHERE id = :id')).rejects.toThrow();
  });
});

describe('SBML through the services', () => {
  it.each(demoModels)('exports and re-imports “$name” with the same network', async ({ name, network }) => {
    const { actors, team } = await storedEnzyme();
    const actor = actors.modeller;
    const created = await createModel({ actor, team, name, network });
    if (!created.ok) throw new Error(created.detail);
    const version = { actor, team, model: created.value.model.id, version: '1' };
    const exported = await exportSbml(version);
    const stored = await readVersion(version);
    if (!exported.ok || !stored.ok) throw new Error('The stored version cannot be read.');
    const imported = await importSbml({ actor, team, text: exported.value.text });
    if (!imported.ok) throw new Error(JSON.stringify(imported));
    const again = await createModel({ actor, team, name, network: imported.value.network });
    expect(again.ok && again.value.version.contentHash).toBe(created.value.version.contentHash);
  });

  it('refuses a document type declaration and names what is wrong', async () => {
    const { actors, team } = await storedEnzyme();
    const text = '<?xml version="1.0"?><!DOCTYPE sbml [<!ENTITY a "b">]><sbml/>';
    const refused = await importSbml({ actor: actors.modeller, team, text });
    expect(refused).toMatchObject({ ok: false, code: 'unreadable_file' });
    if (!refused.ok) expect(JSON.stringify(refused.errors)).toMatch(/DOCTYPE|document type/i);
  });
});

describe('other teams', () => {
  it('cannot see or change a model', async () => {
    const { model } = await storedEnzyme();
    const other = await makeTeam();
    const mine = { actor: other.actors.owner, team: other.team.slug, model };
    expect(await readVersion({ ...mine, version: '1' })).toMatchObject({ ok: false, code: 'not_found' });
    expect(await saveVersion({ ...mine, network: enzyme.network, basedOn: 1 })).toMatchObject({
      ok: false,
      code: 'not_found',
    });
  });
});
