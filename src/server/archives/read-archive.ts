/** Serves a job's archive from its file: whole, in ranges, or not at all when the caller has it already. */
import { createReadStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import { Readable } from 'node:stream';
import type { Actor } from '@/domain/teams/actor.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { findArchive } from './find-archive.ts';
import { parseRange } from './parse-range.ts';

export async function readArchive(options: {
  actor: Actor;
  team: string;
  job: string;
  method: string;
  headers: Headers;
}): Promise<Result<Response>> {
  const { headers } = options;
  const found = await findArchive(options);
  if (!found.ok) return found;
  const { job, file } = found.value;
  const { size } = await stat(file);
  const etag = `"${job.archiveSha256}"`;
  const common = {
    ETag: etag,
    'Accept-Ranges': 'bytes',
    'Cache-Control': 'private, no-cache',
    'Content-Type': 'application/zip',
    'Content-Disposition': `attachment; filename="${fileName(job.name, job.archiveRevision)}"`,
  };
  if (matches(headers.get('if-none-match'), etag)) return accept(new Response(null, { status: 304, headers: common }));

  const ifRange = headers.get('if-range');
  const range = ifRange !== null && ifRange !== etag ? null : parseRange(headers.get('range'), size);
  if (range === 'unsatisfiable')
    return accept(new Response(null, { status: 416, headers: { ...common, 'Content-Range': `bytes */${size}` } }));
  const { start, end } = range ?? { start: 0, end: size - 1 };
  const body =
    options.method === 'HEAD'
      ? null
      : (Readable.toWeb(createReadStream(file, { start, end })) as ReadableStream<Uint8Array>);
  return accept(
    new Response(body, {
      status: range ? 206 : 200,
      headers: {
        ...common,
        'Content-Length': String(end - start + 1),
        ...(range ? { 'Content-Range': `bytes ${start}-${end}/${size}` } : {}),
      },
    }),
  );
}

const matches = (header: string | null, etag: string): boolean =>
  header !== null && header.split(',').some((candidate) => ['*', etag].includes(candidate.trim().replace(/^W\//, '')));

/** Letters, digits and hyphens of the job's name. */
function fileName(name: string, revision: number): string {
  const slug = name
    .normalize('NFKD')
    .replaceAll(/[^A-Za-z0-9]+/g, '-')
    .replaceAll(/^-|-$/g, '')
    .toLowerCase()
    .slice(0, 60);
  return `${slug || 'job'}${revision > 1 ? `-r${revision}` : ''}.zip`;
}
