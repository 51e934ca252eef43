/** The ledger of the team, newest first: what moved, why, by whom, and what was there after it. */
import { useInfiniteQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { SelectField } from '@/components/ui/Field.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { listLedger, type LedgerEntry } from '@/contracts/ledger.ts';
import { transactionKinds, type TransactionKind } from '@/domain/ledger/accounts.ts';
import { LedgerTable } from './LedgerTable.tsx';
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
