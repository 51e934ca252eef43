/** The versions of a model: which is shown, opening another, downloads. */
import { useState } from 'react';
import { urlOf } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { momentText } from '@/components/ui/amounts-text.ts';
import { exportSbml } from '@/contracts/network.ts';
import type { NetworkDocument } from '@/domain/network/document.ts';
import { paths } from '@/paths.ts';
import { DifferenceDialog } from './DifferenceDialog.tsx';
import { saveFile } from './save-file.ts';

export interface ListedVersion {
  id: string;
  number: number;
  note: string;
  createdAt: string;
}

export interface VersionsPanelProps {
  team: string;
  timeZone: string;
  stored: { id: string; name: string; number: number; network: NetworkDocument; versions: ListedVersion[] };
}

/** Letters, digits and dashes of a name, for a file's name. */
const fileStem = (name: string): string => name.replaceAll(/[^\p{L}\p{N}]+/gu, '-').replaceAll(/^-|-$/g, '') || 'model';

export function VersionsPanel({ team, timeZone, stored }: VersionsPanelProps) {
  const [compared, setCompared] = useState<number | null>(null);
  const { versions, number: shown } = stored;
  const stem = `${fileStem(stored.name)}-v${shown}`;
  return (
    <section aria-labelledby="versions-title" className="text-sm">
      <h2 id="versions-title" className="font-semibold">
        Versions
      </h2>
      <ol className="mt-1 max-h-80 overflow-y-auto border-t border-rule">
        {versions.map(({ number, note, createdAt }) => (
          <li key={number} className="border-b border-rule py-2">
            <span className="flex flex-wrap justify-between gap-x-3">
              {number === shown ? (
                <b className="font-semibold">Version {number}, shown</b>
              ) : (
                <a className="link" href={`${paths.model(team, stored.id)}?version=${number}`}>
                  Version {number}
                </a>
              )}
              <time dateTime={createdAt} className="text-soft">
                {momentText(createdAt, timeZone)}
              </time>
            </span>
            {note !== '' && <span className="block text-soft [overflow-wrap:anywhere]">{note}</span>}
            {number !== shown && (
              <button type="button" className="link block text-soft" onClick={() => setCompared(number)}>
                Compare with version {shown}
              </button>
            )}
          </li>
        ))}
      </ol>
      <div className="mt-3 flex flex-wrap gap-2">
        <a
          className="link self-center"
          download={`${stem}.xml`}
          href={urlOf(exportSbml, { team, model: stored.id, version: String(shown) })}
        >
          Download SBML
        </a>
        <Button
          size="small"
          variant="quiet"
          onClick={() => saveFile(`${stem}.json`, 'application/json', `${JSON.stringify(stored.network, null, 2)}\n`)}
        >
          Download JSON
        </Button>
      </div>
      {compared !== null && (
        <DifferenceDialog
          team={team}
          model={stored.id}
          from={Math.min(compared, shown)}
          to={Math.max(compared, shown)}
          onClose={() => setCompared(null)}
        />
      )}
    </section>
  );
}
