/** Adds an endpoint and shows its secret this once. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { CopyButton } from '@/components/ui/CopyButton.tsx';
import { CheckField, TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { createWebhook } from '@/contracts/webhooks.ts';
import { webhookKinds, type WebhookKind } from '@/domain/webhooks/webhook-kinds.ts';
import { kindWords } from './webhook-words.ts';

export function NewWebhook({ team, onCreated }: { team: string; onCreated: () => Promise<void> }) {
  const [url, setUrl] = useState('');
  const [kinds, setKinds] = useState<WebhookKind[]>(['job_finished', 'job_stopped_at_cap', 'job_failed']);
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [secret, setSecret] = useState<string | null>(null);

  async function create(): Promise<void> {
    setPending(true);
    const called = await callApi(createWebhook, { path: { team }, body: { url, kinds } });
    setPending(false);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setSecret(called.value.secret);
    setUrl('');
    await onCreated();
  }

  return (
    <section aria-labelledby="new-webhook" className="max-w-2xl">
      <h2 id="new-webhook" className="mb-3 text-lg font-semibold">
        New webhook
      </h2>
      {secret && (
        <Notice
          tone="caution"
          title="Copy the secret now; it cannot be shown again"
          className="mb-5"
          action={
            <>
              <CopyButton text={secret}>Copy the secret</CopyButton>
              <Button size="small" variant="quiet" onClick={() => setSecret(null)}>
                Done
              </Button>
            </>
          }
        >
          <p>Your system checks the signature of each delivery with it.</p>
          <code className="mt-1 block break-all bg-glass px-2 py-1">{secret}</code>
        </Notice>
      )}
      <WhenLive>
        <form
          className="flex flex-col gap-4"
          onSubmit={(event) => {
            event.preventDefault();
            if (!pending) void create();
          }}
        >
          <TextField
            label="Address"
            hint="On the public internet, port 443 or 80, such as https://hooks.example.com/burette."
            type="url"
            required
            maxLength={2_000}
            value={url}
            onChange={(event) => setUrl(event.target.value)}
          />
          <fieldset>
            <legend className="mb-1 text-sm font-medium">Tell it when</legend>
            <div className="grid gap-x-6 gap-y-2.5 border-t border-rule pt-3 sm:grid-cols-2">
              {webhookKinds.map((kind) => (
                <CheckField
                  key={kind}
                  label={kindWords[kind]}
                  hint={<code>{kind}</code>}
                  checked={kinds.includes(kind)}
                  onChange={(event) =>
                    setKinds(webhookKinds.filter((one) => (one === kind ? event.target.checked : kinds.includes(one))))
                  }
                />
              ))}
            </div>
          </fieldset>
          {problem && <ProblemNotice problem={problem} />}
          <div>
            <Button type="submit" variant="primary" pending={pending} disabled={kinds.length === 0}>
              Add the webhook
            </Button>
          </div>
        </form>
      </WhenLive>
    </section>
  );
}
