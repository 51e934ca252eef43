/** The archive of a finished job: the file, its size and the digest by which anybody can check it. */
import { Download } from 'lucide-react';
import { urlOf } from '@/components/api/call-api.ts';
import { ButtonLink } from '@/components/ui/Button.tsx';
import { CopyButton } from '@/components/ui/CopyButton.tsx';
import { bytesText } from '@/components/ui/amounts-text.ts';
import { downloadArchive } from '@/contracts/archives.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { ArchiveContents } from './ArchiveContents.tsx';

export function ArchiveDownload({ team, job }: { team: string; job: Pick<JobDocument, 'id' | 'archive'> }) {
  const { archive } = job;
  if (archive === null) return null;
  return (
    <section aria-labelledby="archive-title" className="text-sm">
      <h2 id="archive-title" className="font-semibold">
        Archive{archive.revision > 1 && `, revision ${archive.revision}`}
      </h2>
      <p className="mt-1 text-soft">
        Model, settings, results, figures, report and checksums in one zip that anyone can open and check.
      </p>
      <ButtonLink
        className="mt-3 w-full"
        href={urlOf(downloadArchive, { team, job: job.id })}
        download={`burette-${job.id}.omex`}
      >
        <Download aria-hidden="true" className="h-4 w-4" /> Download, {bytesText(archive.bytes)}
      </ButtonLink>
      <ArchiveContents team={team} job={job.id} sha256={archive.sha256} />
      <dl className="mt-3">
        <dt className="text-soft">SHA-256</dt>
        <dd className="break-all text-xs">{archive.sha256}</dd>
      </dl>
      <div className="mt-2">
        <CopyButton text={archive.sha256}>Copy the digest</CopyButton>
      </div>
    </section>
  );
}
