/** Pro-formas: asked for with a PO number, paid by bank transfer, turned into an invoice when the transfer has come. */
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { callApi, urlOf } from '@/components/api/call-api.ts';
import { Moment, Money } from '@/components/ui/Amounts.tsx';
import { countText } from '@/components/ui/amounts-text.ts';
import { EmptyState } from '@/components/ui/EmptyState.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { Table } from '@/components/ui/Table.tsx';
import { downloadProFormaPdf, listProFormas, type ProFormaDocument } from '@/contracts/billing.ts';
import type { CreditPack } from '@/domain/pricing/price-book.ts';
import { paths } from '@/paths.ts';
import { proFormaWords } from './invoice-words.ts';
import { RequestProForma } from './RequestProForma.tsx';

export interface ProFormasProps {
  team: string;
  timeZone: string;
  mayRequest: boolean;
  packs: CreditPack[];
  initial: ProFormaDocument[];
}

export function ProFormas(props: ProFormasProps) {
  return (
    <QueryProvider>
      <List {...props} />
    </QueryProvider>
  );
}

function List({ team, timeZone, mayRequest, packs, initial }: ProFormasProps) {
  const queries = useQueryClient();
  const proFormas = useQuery({
    queryKey: ['pro-formas', team],
    initialData: initial,
    queryFn: async () => {
      const called = await callApi(listProFormas, { path: { team }, query: { limit: 200 } });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.proFormas;
    },
  }).data;
  return (
    <div className="flex flex-col gap-10">
      {proFormas.length === 0 ? (
        <EmptyState title="No pro-formas">
          <p>
            A pro-forma asks you to pay a credit pack by bank transfer. It is no tax document: credits and the invoice
            come when the transfer has arrived.
          </p>
        </EmptyState>
      ) : (
        <Table
          caption="Pro-formas"
          rows={proFormas}
          rowKey={({ id }) => id}
          columns={[
            {
              id: 'number',
              title: 'Number',
              cell: (one) => (
                <a className="link font-semibold" href={urlOf(downloadProFormaPdf, { team, proForma: one.id })}>
                  {one.number}
                </a>
              ),
            },
            {
              id: 'state',
              title: 'State',
              cell: (one) => {
                const { tone, words } = proFormaWords(one);
                return <StateLabel tone={tone}>{words}</StateLabel>;
              },
            },
            { id: 'due', title: 'Due', cell: (one) => <Moment time={one.dueAt} timeZone={timeZone} dayOnly /> },
            { id: 'po', title: 'PO number', cell: (one) => one.purchaseOrder },
            { id: 'credits', title: 'Credits', figure: true, cell: (one) => countText(one.credits) },
            { id: 'total', title: 'Total', figure: true, cell: (one) => <Money {...one.total} /> },
            {
              id: 'invoice',
              title: 'Invoice',
              cell: (one) =>
                one.invoiceId ? (
                  <a className="link" href={paths.invoice(team, one.invoiceId)}>
                    Open
                  </a>
                ) : (
                  '–'
                ),
            },
          ]}
        />
      )}
      {mayRequest && (
        <section aria-labelledby="request" className="max-w-2xl">
          <h2 id="request" className="mb-3 text-lg font-semibold">
            Ask for a pro-forma
          </h2>
          <RequestProForma
            team={team}
            packs={packs}
            onRequested={() => queries.invalidateQueries({ queryKey: ['pro-formas', team] })}
          />
        </section>
      )}
    </div>
  );
}
