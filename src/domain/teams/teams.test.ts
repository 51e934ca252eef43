/** Slugs of teams, and relations in the table of permissions. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { mayDo, permissions, permissionsOf, permissionsOfRole, roles, tokenScopes } from './permissions.ts';
import { teamSlug } from './team-slug.ts';

const free = () => false;

describe('teamSlug', () => {
  it.each([
    ['Tarn & Fell Modelling', 'tarn-fell-modelling'],
    ['  Ærø Ünits  ', 'r-units'],
    ['日本', 'team'],
    ['API', 'team-api'],
    ['--', 'team'],
  ])('makes “%s” into %s', (name, slug) => {
    expect(teamSlug(name, free)).toBe(slug);
  });

  it('numbers a taken slug', () => {
    const taken = new Set(['moor', 'moor-2']);
    expect(teamSlug('Moor', (slug) => taken.has(slug))).toBe('moor-3');
  });

  it('is always safe in a URL and at most 45 characters, whatever the name (seed 7)', () => {
    const safe = fc.property(fc.string({ unit: 'grapheme', maxLength: 200 }), (name) => {
      expect(teamSlug(name, free)).toMatch(/^[a-z0-9]+(-[a-z0-9]+)*$/);
      expect(teamSlug(name, free).length).toBeLessThanOrEqual(45);
    });
    fc.assert(safe, { seed: 7, numRuns: 500 });
  });
});

describe('the table of permissions', () => {
  it('gives the owner everything and everybody their own membership', () => {
    expect(permissionsOfRole.owner).toEqual(permissions);
    for (const role of roles) expect(mayDo([role], 'membership:leave')).toBe(true);
  });

  it('keeps finance from launching and modellers from money, as the product says', () => {
    expect(mayDo(['finance'], 'jobs:launch')).toBe(false);
    expect(mayDo(['modeller'], 'billing:read')).toBe(false);
    expect(mayDo(['viewer'], 'models:write')).toBe(false);
    expect(mayDo(['finance', 'modeller'], 'jobs:launch')).toBe(true);
  });

  it('adds up: a set of roles may do what one of them may', () => {
    expect(permissionsOf(['finance', 'viewer'])).toEqual(permissionsOf(['finance']));
    expect(permissionsOf([])).toEqual([]);
  });

  it('never lets a token manage people or tokens', () => {
    expect(tokenScopes.filter((scope) => /manage|leave/.test(scope))).toEqual([]);
  });
});
