/** Archives of finished jobs. */
import { z } from 'zod';
import { contract } from './contract.ts';

export const downloadArchive = contract({
  id: 'downloadArchive',
  feature: 'archives',
  method: 'GET',
  path: '/api/v1/teams/{team}/jobs/{job}/archive',
  summary: 'The archive as a zip (a valid COMBINE archive); ETag is its SHA-256, ranges are served',
  access: { kind: 'team', permission: 'results:read' },
  answers: [
    { status: 200, description: 'The whole archive', contentType: 'application/zip' },
    { status: 206, description: 'The range asked for', contentType: 'application/zip' },
    { status: 304, description: 'Unchanged' },
  ],
  refusals: ['not_signed_in', 'not_found', 'forbidden', 'results_not_ready', 'range_not_satisfiable'],
});

export const archiveFiles = z.object({
  /** SHA-256 of the archive that was looked into. */
  sha256: z.string(),
  files: z.array(z.object({ path: z.string(), bytes: z.number().int() })),
});
export type ArchiveFiles = z.infer<typeof archiveFiles>;

export const listArchiveFiles = contract({
  id: 'listArchiveFiles',
  feature: 'archives',
  method: 'GET',
  path: '/api/v1/teams/{team}/jobs/{job}/archive/files',
  summary: 'What the archive holds: paths and sizes, unpacked',
  access: { kind: 'team', permission: 'results:read' },
  answers: [{ status: 200, description: 'The files', schema: archiveFiles }],
  refusals: ['not_signed_in', 'not_found', 'forbidden', 'results_not_ready'],
});

export const archiveContracts = [downloadArchive, listArchiveFiles];
