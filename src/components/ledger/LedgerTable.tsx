/** Ledger entries as a table: what moved, why, by whom, and what was there after it. */
import { Moment } from '@/components/ui/Amounts.tsx';
import { exactCreditsText } from '@/components/ui/amounts-text.ts';
import type { LedgerEntry } from '@/contracts/ledger.ts';
import { paths } from '@/paths.ts';
import { ledgerKindWords } from './ledger-words.ts';

const signed = (microcredits: number): string =>
  microcredits === 0 ? '' : `${microcredits > 0 ? '+' : ''}${exactCreditsText(microcredits, 6)}`;

export function LedgerTable({ team, timeZone, entries }: { team: string; timeZone: string; entries: LedgerEntry[] }) {
  return (
    <div className="overflow-x-auto" role="region" aria-label="Ledger" tabIndex={0}>
      <table className="ruled">
        <caption className="sr-only">Ledger entries, newest first, in credits</caption>
        <thead>
          <tr>
            <th scope="col" className="hidden sm:table-cell">
              When
            </th>
            <th scope="col">What</th>
            <th scope="col" className="figure">
              Available
            </th>
            <th scope="col" className="figure hidden sm:table-cell">
              Held
            </th>
            <th scope="col" className="figure">
              After
            </th>
          </tr>
        </thead>
        <tbody>
          {entries.map((entry) => (
            <tr key={entry.id}>
              <td className="hidden sm:table-cell">
                <Moment time={entry.occurredAt} timeZone={timeZone} />
                <span className="block text-xs text-soft">no. {entry.sequence}</span>
              </td>
              <td className="sm:min-w-[13rem]">
                <span className="block text-xs text-soft sm:hidden">
                  <Moment time={entry.occurredAt} timeZone={timeZone} />
                </span>
                <span className="font-medium">{ledgerKindWords[entry.kind]}</span>
                <span className="block text-soft [overflow-wrap:anywhere]">
                  {entry.description}
                  {entry.person && ` · ${entry.person.name}`}
                  {entry.jobId && (
                    <>
                      {' · '}
                      <a className="link" href={paths.job(team, entry.jobId)}>
                        job
                      </a>
                    </>
                  )}
                </span>
              </td>
              <td className="figure">{signed(entry.availableChangeMicrocredits)}</td>
              <td className="figure hidden sm:table-cell">{signed(entry.heldChangeMicrocredits)}</td>
              <td className="figure font-medium">{exactCreditsText(entry.availableMicrocredits, 6)}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}
