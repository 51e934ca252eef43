/** Walks the endpoint files and compares them with the contracts: none missing, none too many. */
import { readdir, readFile } from 'node:fs/promises';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { contracts } from '@/contracts/index.ts';
import { openApiDocument } from '@/contracts/open-api.ts';
import { projectRoot } from '@/server/project-root.ts';

async function routes(): Promise<string[]> {
  const root = path.join(projectRoot, 'src/pages');
  const files = await readdir(path.join(root, 'api'), { recursive: true, withFileTypes: true });
  const found: string[] = [];
  for (const file of files) {
    if (!file.isFile() || !file.name.endsWith('.ts')) continue;
    const full = path.join(file.parentPath, file.name);
    const url =
      '/' +
      path
        .relative(root, full)
        .replace(/\.ts$/, '')
        .replace(/\/index$/, '')
        .replaceAll(/\[(\w+)\]/g, '{$1}');
    const source = await readFile(full, 'utf8');
    for (const [, method] of source.matchAll(/export const (GET|POST|PUT|PATCH|DELETE)\b/g))
      found.push(`${method} ${url}`);
  }
  return found.sort();
}

describe('the API description', () => {
  it('lists every endpoint that exists, and only those', async () => {
    const described = contracts.map(({ method, path }) => `${method} ${path}`).sort();
    expect(described).toEqual(await routes());
  });

  it('gives every operation its own id and a valid place in the OpenAPI document', () => {
    const document = openApiDocument(contracts, 'https://burette.example') as {
      paths: Record<string, Record<string, { operationId: string }>>;
    };
    const ids = Object.values(document.paths).flatMap((path) =>
      Object.values(path).map(({ operationId }) => operationId),
    );
    expect(new Set(ids).size).toBe(contracts.length);
  });
});
