/** The ledger of the team, newest first: what moved, why, by whom, and what was there after it. */
import { useInfiniteQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Moment } from '@/components/ui/Amounts.tsx';
import { exactCreditsText } from '@/components/ui/amounts-text.ts';
import { Button } from '@/components/ui/Button.tsx';
import { SelectField } from '@/components/ui/Field.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { listLedger, type LedgerEntry } from '@/contracts/ledger.ts';
import { transactionKinds, type TransactionKind } from '@/domain/ledger/accounts.ts';
import { paths } from '@/paths.ts';
import { ledgerKindWords } from './ledger-words.ts';

export interface LedgerListProps {
  team: string;
  timeZone: string;
  initial: { entries: LedgerEntry[]; nextCursor: string | null };
}

export function LedgerList(props: LedgerListProps) {
  return (
    <QueryProvider>
      <List {...props} />
    </QueryProvider>
  );
}

function List({ team, timeZone, initial }: LedgerListProps) {
  const [kind, setKind] = useState<TransactionKind | ''>('');
  const ledger = useInfiniteQuery({
    queryKey: ['ledger', team, kind],
    initialPageParam: undefined as string | undefined,
    queryFn: async ({ pageParam, signal }) => {
      const query = { cursor: pageParam, kind: kind || undefined };
      const called = await callApi(listLedger, { path: { team }, query, signal });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value;
    },
    getNextPageParam: (page) => page.nextCursor ?? undefined,
    ...(kind === '' ? { initialData: { pages: [initial], pageParams: [undefined] } } : {}),
  });
  const entries = ledger.data?.pages.flatMap((page) => page.entries) ?? [];
  return (
    <div>
      <SelectField
        label="Show"
        value={kind}
        onChange={(event) => setKind(event.target.value as TransactionKind | '')}
        choices={[
          { value: '', label: 'All entries' },
          ...transactionKinds.map((value) => ({ value, label: ledgerKindWords[value] })),
        ]}
        fieldClassName="mb-4 max-w-[14rem]"
      />
      {entries.length > 0 && <LedgerTable {...{ team, timeZone, entries }} />}
      {entries.length === 0 && !ledger.isFetching && !ledger.isError && (
        <p className="border-t border-rule py-3 text-soft">No entries of this kind.</p>
      )}
      {ledger.isFetching && entries.length === 0 && <Waiting>Reading the ledger</Waiting>}
      {ledger.isError && (
        <Notice
          tone="failure"
          title="The ledger could not be read"
          action={
            <Button size="small" onClick={() => void ledger.refetch()}>
              Read it again
            </Button>
          }
        >
          {ledger.error.message}
        </Notice>
      )}
      {ledger.hasNextPage && (
        <Button
          size="small"
          className="mt-4"
          pending={ledger.isFetchingNextPage}
          onClick={() => void ledger.fetchNextPage()}
        >
          Show older entries
        </Button>
      )}
    </div>
  );
}

const signed = (microcredits: number): string =>
  microcredits === 0 ? '' : `${microcredits > 0 ? '+' : ''}${exactCreditsText(microcredits, 6)}`;

function LedgerTable({ team, timeZone, entries }: { team: string; timeZone: string; entries: LedgerEntry[] }) {
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
