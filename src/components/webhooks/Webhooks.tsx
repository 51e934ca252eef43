/** Endpoints of a team: added with their events, paused, removed; each with its delivery log. */
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { z } from 'zod';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { ConfirmButton } from '@/components/ui/Dialog.tsx';
import { EmptyState } from '@/components/ui/EmptyState.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { changeWebhook, listWebhooks, removeWebhook, type webhookDocument } from '@/contracts/webhooks.ts';
import { DeliveryLog } from './DeliveryLog.tsx';
import { NewWebhook } from './NewWebhook.tsx';
import { kindWords } from './webhook-words.ts';

type Webhook = z.output<typeof webhookDocument>;

export interface WebhooksProps {
  team: string;
  timeZone: string;
  suspended: boolean;
  initial: Webhook[];
}

export function Webhooks(props: WebhooksProps) {
  return (
    <QueryProvider>
      <List {...props} />
    </QueryProvider>
  );
}

function List({ team, timeZone, suspended, initial }: WebhooksProps) {
  const queries = useQueryClient();
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const refresh = (): Promise<void> => queries.invalidateQueries({ queryKey: ['webhooks', team] });
  const webhooks = useQuery({
    queryKey: ['webhooks', team],
    initialData: initial,
    queryFn: async () => {
      const called = await callApi(listWebhooks, { path: { team } });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.webhooks;
    },
  }).data;

  async function setPaused(webhook: Webhook, paused: boolean): Promise<void> {
    const called = await callApi(changeWebhook, { path: { team, webhook: webhook.id }, body: { paused } });
    setProblem(called.ok ? null : called.problem);
    await refresh();
  }
  async function remove(webhook: Webhook): Promise<void> {
    const called = await callApi(removeWebhook, { path: { team, webhook: webhook.id } });
    setProblem(called.ok ? null : called.problem);
    await refresh();
  }

  return (
    <div className="flex flex-col gap-10">
      {problem && <ProblemNotice problem={problem} />}
      {webhooks.length === 0 ? (
        <EmptyState title="No webhooks">
          <p>
            A webhook tells a system of yours what happens here, signed, as it happens: a job’s end, an invoice, little
            credit left.
          </p>
        </EmptyState>
      ) : (
        <ul className="-mt-6">
          {webhooks.map((webhook) => (
            <li key={webhook.id} className="border-b border-rule py-3">
              <div className="flex flex-wrap items-start justify-between gap-x-6 gap-y-2">
                <span className="min-w-0">
                  <b className="block font-semibold [overflow-wrap:anywhere]">{webhook.url}</b>
                  <span className="block text-sm text-soft">
                    {webhook.kinds.map((kind) => kindWords[kind]).join(' · ')}
                  </span>
                  {webhook.pausedAt && <StateLabel tone="over">Paused: nothing new is sent</StateLabel>}
                </span>
                {!suspended && (
                  <span className="flex gap-2">
                    <Button
                      size="small"
                      variant="secondary"
                      aria-label={`${webhook.pausedAt ? 'Resume' : 'Pause'} ${webhook.url}`}
                      onClick={() => void setPaused(webhook, !webhook.pausedAt)}
                    >
                      {webhook.pausedAt ? 'Resume' : 'Pause'}
                    </Button>
                    <ConfirmButton
                      size="small"
                      variant="secondary"
                      label={`Remove ${webhook.url}`}
                      title="Remove this webhook"
                      question="What waits for it is not sent, and its secret no longer signs anything."
                      confirm="Remove the webhook"
                      onConfirm={() => remove(webhook)}
                    >
                      Remove
                    </ConfirmButton>
                  </span>
                )}
              </div>
              <DeliveryLog team={team} webhook={webhook.id} timeZone={timeZone} suspended={suspended} />
            </li>
          ))}
        </ul>
      )}
      {!suspended && <NewWebhook team={team} onCreated={refresh} />}
    </div>
  );
}
