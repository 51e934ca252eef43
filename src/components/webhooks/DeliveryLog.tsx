/** The newest deliveries of an endpoint, opened on demand: what, when, with which answer; each can be sent again. */
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Moment } from '@/components/ui/Amounts.tsx';
import { Button } from '@/components/ui/Button.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { Table } from '@/components/ui/Table.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { listDeliveries, redeliverWebhook } from '@/contracts/webhooks.ts';
import { deliveryStates, kindWords } from './webhook-words.ts';

export function DeliveryLog({
  team,
  webhook,
  timeZone,
  suspended,
}: {
  team: string;
  webhook: string;
  timeZone: string;
  suspended: boolean;
}) {
  const queries = useQueryClient();
  const [open, setOpen] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const queryKey = ['deliveries', team, webhook];
  const found = useQuery({
    queryKey,
    enabled: open,
    refetchInterval: (query) => (query.state.data?.some(({ state }) => state === 'queued') ? 3_000 : false),
    queryFn: async () => {
      const called = await callApi(listDeliveries, { path: { team, webhook }, query: { limit: 50 } });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.deliveries;
    },
  });

  async function redeliver(delivery: string): Promise<void> {
    const called = await callApi(redeliverWebhook, { path: { team, webhook, delivery } });
    setProblem(called.ok ? null : called.problem);
    await queries.invalidateQueries({ queryKey });
  }

  return (
    <details className="mt-2 text-sm" onToggle={(event) => setOpen(event.currentTarget.open)}>
      <summary className="cursor-pointer font-medium">Delivery log</summary>
      <div className="mt-2 flex flex-col gap-3">
        {problem && <ProblemNotice problem={problem} />}
        {found.isError && <p role="alert">The log could not be read: {found.error.message}</p>}
        {found.isPending && open && <p className="text-soft">Reading the log…</p>}
        {found.data?.length === 0 && <p className="text-soft">Nothing has been sent yet.</p>}
        {found.data && found.data.length > 0 && (
          <Table
            caption="Deliveries, newest first"
            rows={found.data}
            rowKey={({ id }) => id}
            columns={[
              { id: 'kind', title: 'Event', cell: ({ kind }) => kindWords[kind] },
              { id: 'at', title: 'Happened', cell: ({ createdAt }) => <Moment time={createdAt} timeZone={timeZone} /> },
              {
                id: 'state',
                title: 'State',
                cell: ({ state }) => (
                  <StateLabel tone={deliveryStates[state].tone}>{deliveryStates[state].words}</StateLabel>
                ),
              },
              { id: 'attempts', title: 'Attempts', figure: true, cell: ({ attempts }) => attempts },
              {
                id: 'answer',
                title: 'Last answer',
                cell: ({ lastStatus, lastFault, nextAttemptAt }) => (
                  <>
                    {lastFault ?? lastStatus ?? 'none yet'}
                    {lastFault && nextAttemptAt && (
                      <span className="block text-soft">
                        Next attempt <Moment time={nextAttemptAt} timeZone={timeZone} />
                      </span>
                    )}
                  </>
                ),
              },
              {
                id: 'again',
                title: <span className="sr-only">Send again</span>,
                cell: ({ id, createdAt }) =>
                  suspended ? null : (
                    <Button
                      size="small"
                      variant="quiet"
                      aria-label={`Send the delivery of ${createdAt} again`}
                      onClick={() => void redeliver(id)}
                    >
                      Send again
                    </Button>
                  ),
              },
            ]}
          />
        )}
      </div>
    </details>
  );
}
