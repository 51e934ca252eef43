import { describe, expect, it } from 'vitest';
import { localPath } from './local-path.ts';

describe('localPath', () => {
  it('keeps paths of this site with their query', () => {
    expect(localPath('/t/tarn-fell/jobs?state=done#top')).toBe('/t/tarn-fell/jobs?state=done#top');
  });
  // The ways round such a check that the OWASP cheat sheet on unvalidated redirects lists (from memory).
  it.each([
    'https://elsewhere.example/',
    '//elsewhere.example/',
    '/\\elsewhere.example',
    '\\\\elsewhere.example',
    'javascript:alert(1)',
    '/\t/elsewhere.example',
    '/\n/elsewhere.example',
    'elsewhere.example',
    '',
  ])('refuses %j', (next) => {
    expect(localPath(next)).toBeNull();
  });
});
