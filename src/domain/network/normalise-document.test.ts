import { describe, expect, it } from 'vitest';
import type { NetworkDocument } from './document.ts';
import { normaliseDocument } from './normalise-document.ts';

const spelled: NetworkDocument = {
  reactions: [{ rateLaw: { constant: ' k ', kind: 'massAction' }, equation: 'A+A->', id: 'r', name: ' ' }],
  species: [{ initialCount: 1, id: 'A' }],
  parameters: [{ value: 2, id: 'k', unit: '1/s' }],
  timeUnit: 's',
};
const canonical =
  '{"timeUnit":"s","compartments":[],"species":[{"id":"A","initialCount":1,"boundary":false,"meaning":"count"}],' +
  '"parameters":[{"id":"k","value":2,"unit":"1/s"}],"assignmentRules":[],' +
  '"reactions":[{"id":"r","equation":"2 A → ∅","rateLaw":{"kind":"massAction","constant":"k"},"localParameters":[]}],"observables":[]}';

describe('normaliseDocument', () => {
  it('gives one JSON text for one network, however it was spelled', () => {
    expect(JSON.stringify(normaliseDocument(spelled))).toBe(canonical);
    const filled: NetworkDocument = {
      ...spelled,
      observables: [],
      species: [{ meaning: 'count', boundary: false, initialCount: 1, id: 'A', name: '' }],
    };
    expect(JSON.stringify(normaliseDocument(filled))).toBe(canonical);
  });

  it('changes nothing the second time', () => {
    const once = normaliseDocument(spelled);
    expect(normaliseDocument(once)).toEqual(once);
  });

  it('keeps a text that cannot be read and drops keys that mean nothing', () => {
    const broken = {
      ...spelled,
      reactions: [{ ...spelled.reactions[0]!, equation: ' A + ' }],
      colour: 'red',
    } as NetworkDocument;
    const normalised = normaliseDocument(broken);
    expect(normalised.reactions[0]!.equation).toBe('A +');
    expect(normalised).not.toHaveProperty('colour');
  });
});
