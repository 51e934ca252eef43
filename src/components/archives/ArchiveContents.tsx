/** What an archive holds, asked for when it is opened. */
import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { bytesText } from '@/components/ui/amounts-text.ts';
import { listArchiveFiles } from '@/contracts/archives.ts';

interface Props {
  team: string;
  job: string;
  sha256: string;
}

export function ArchiveContents({ team, job, sha256 }: Props) {
  const [open, setOpen] = useState(false);
  const { data, error } = useQuery({
    queryKey: ['archive files', sha256],
    enabled: open,
    staleTime: Infinity,
    queryFn: async ({ signal }) => {
      const called = await callApi(listArchiveFiles, { path: { team, job }, signal });
      if (called.ok) return called.value.files;
      throw new Error(called.problem.detail);
    },
  });
  return (
    <details className="mt-3" onToggle={(event) => setOpen(event.currentTarget.open)}>
      <summary className="cursor-pointer py-1 font-medium text-bromo">What it holds</summary>
      {data ? (
        <ul className="mt-1 text-xs">
          {data.map(({ path, bytes }) => (
            <li key={path} className="flex justify-between gap-3 border-b border-rule py-1">
              <span className="min-w-0 break-all">{path}</span>
              <span className="shrink-0 tabular-nums text-soft">{bytesText(bytes)}</span>
            </li>
          ))}
        </ul>
      ) : (
        <p role="status" className="mt-1 text-xs text-soft">
          {error ? `The list could not be read: ${error.message}` : 'Reading the list …'}
        </p>
      )}
    </details>
  );
}
