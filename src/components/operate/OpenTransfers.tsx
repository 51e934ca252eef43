/** Pro-formas that wait for money; an operator says when it has come. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Moment, Money } from '@/components/ui/Amounts.tsx';
import { countText, moneyText } from '@/components/ui/amounts-text.ts';
import { ConfirmButton } from '@/components/ui/Dialog.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { Table } from '@/components/ui/Table.tsx';
import { proFormaWords } from '@/components/billing/invoice-words.ts';
import { markTransferReceived, type ProFormaDocument } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';

type OpenTransfer = ProFormaDocument & { team: { slug: string; name: string } };

export function OpenTransfers({ initial }: { initial: OpenTransfer[] }) {
  const [open, setOpen] = useState(initial);
  const [done, setDone] = useState<string | null>(null);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);

  async function received(one: OpenTransfer): Promise<void> {
    const called = await callApi(markTransferReceived, { path: { proForma: one.id } });
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setOpen((present) => present.filter(({ id }) => id !== one.id));
    setDone(`${one.number} is paid: ${countText(one.credits)} credits and the invoice went to ${one.team.name}.`);
  }

  return (
    <div className="flex flex-col gap-4">
      {problem && <ProblemNotice problem={problem} />}
      {done && <Notice tone="done">{done}</Notice>}
      <Table
        caption="Open pro-formas"
        rows={open}
        rowKey={({ id }) => id}
        columns={[
          { id: 'number', title: 'Number', cell: ({ number }) => <b className="font-semibold">{number}</b> },
          { id: 'team', title: 'Team', cell: ({ team }) => team.name },
          {
            id: 'state',
            title: 'State',
            cell: (one) => {
              const { tone, words } = proFormaWords(one);
              return <StateLabel tone={tone}>{words}</StateLabel>;
            },
          },
          { id: 'due', title: 'Due', cell: ({ dueAt }) => <Moment time={dueAt} dayOnly /> },
          { id: 'po', title: 'PO number', cell: ({ purchaseOrder }) => purchaseOrder },
          { id: 'total', title: 'Total', figure: true, cell: ({ total }) => <Money {...total} /> },
          {
            id: 'act',
            title: 'Received',
            cell: (one) => (
              <ConfirmButton
                variant="secondary"
                size="small"
                title={`Has the transfer of ${one.number} come?`}
                question={
                  <p>
                    {one.team.name} gets {countText(one.credits)} credits and an invoice over{' '}
                    {moneyText(one.total.amountMinor, one.total.currency)}. An invoice is never edited or taken back.
                  </p>
                }
                confirm="Mark it received"
                onConfirm={() => received(one)}
              >
                Mark received
              </ConfirmButton>
            ),
          },
        ]}
      />
    </div>
  );
}
