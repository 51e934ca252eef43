/** What an archive holds, from its directory: the archive itself is not read. */
import type { ArchiveFiles } from '@/contracts/archives.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { ZipReader } from '@/formats/zip/zip-reader.ts';
import { findArchive } from './find-archive.ts';

export async function listArchiveFiles(options: {
  actor: Actor;
  team: string;
  job: string;
}): Promise<Result<ArchiveFiles>> {
  const found = await findArchive(options);
  if (!found.ok) return found;
  const zip = await ZipReader.open(found.value.file);
  await zip.close();
  const files = [...zip.entries.values()].map(({ path, bytes }) => ({ path, bytes }));
  return accept({ sha256: found.value.sha256, files });
}
