/** Makes an API token and shows its secret this once. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { CopyButton } from '@/components/ui/CopyButton.tsx';
import { CheckField, SelectField, TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { createToken } from '@/contracts/teams.ts';
import type { TokenScope } from '@/domain/teams/permissions.ts';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

const scopeWords: Record<TokenScope, string> = {
  'team:read': 'Read the team and its project codes',
  'models:read': 'Read models',
  'models:write': 'Create and change models',
  'jobs:read': 'Read quotes and jobs',
  'jobs:launch': 'Take quotes, launch, extend and cancel jobs (spends credits)',
  'results:read': 'Read results and archives',
  'credits:read': 'Read credits and the ledger',
  'billing:read': 'Read invoices',
  'billing:write': 'Buy credits, change billing details and project codes',
};
const lifetimes = [
  { value: '30', label: '30 days' },
  { value: '90', label: '90 days' },
  { value: '365', label: 'A year' },
  { value: '', label: 'Until revoked' },
];

export function NewToken({
  team,
  scopes: grantable,
  onCreated,
}: {
  team: string;
  scopes: TokenScope[];
  onCreated: () => Promise<void>;
}) {
  const [name, setName] = useState('');
  const [scopes, setScopes] = useState<TokenScope[]>(grantable.filter((scope) => !scope.startsWith('billing:')));
  const [days, setDays] = useState('90');
  const [cap, setCap] = useState('');
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [secret, setSecret] = useState<string | null>(null);

  async function create(): Promise<void> {
    setPending(true);
    const expiresInDays = days === '' ? null : Number(days);
    const capMicrocredits = cap === '' ? null : Math.round(Number(cap) * 1_000_000);
    const called = await callApi(createToken, {
      path: { team },
      body: { name, scopes, expiresInDays, capMicrocredits },
    });
    setPending(false);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setSecret(called.value.secret);
    setName('');
    await onCreated();
  }

  return (
    <section aria-labelledby="new-token" className="max-w-2xl">
      <h2 id="new-token" className="mb-3 text-lg font-semibold">
        New token
      </h2>
      {secret && (
        <Notice
          tone="caution"
          title="Copy the token now; it cannot be shown again"
          className="mb-5"
          action={
            <>
              <CopyButton text={secret}>Copy the token</CopyButton>
              <Button size="small" variant="quiet" onClick={() => setSecret(null)}>
                Done
              </Button>
            </>
          }
        >
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
          <div className="grid gap-4 sm:grid-cols-[minmax(0,1fr)_11rem]">
            <TextField
              label="Name"
              hint="Where it is used, such as “nightly report”."
              required
              maxLength={80}
              value={name}
              onChange={(event) => setName(event.target.value)}
            />
            <SelectField
              label="Valid for"
              value={days}
              choices={lifetimes}
              onChange={(event) => setDays(event.target.value)}
            />
          </div>
          {scopes.includes('jobs:launch') && (
            <TextField
              label="Spending cap"
              hint="What jobs launched with the token may spend and hold in all. Empty: only the budgets bound it."
              unit="credits"
              type="number"
              min="0.000001"
              step="any"
              fieldClassName="max-w-xs"
              value={cap}
              onChange={(event) => setCap(event.target.value)}
            />
          )}
          <fieldset>
            <legend className="mb-1 text-sm font-medium">Scopes</legend>
            <div className="grid gap-x-6 gap-y-2.5 border-t border-rule pt-3 sm:grid-cols-2">
              {grantable.map((scope) => (
                <CheckField
                  key={scope}
                  label={scope}
                  hint={scopeWords[scope]}
                  checked={scopes.includes(scope)}
                  onChange={(event) =>
                    setScopes(grantable.filter((one) => (one === scope ? event.target.checked : scopes.includes(one))))
                  }
                />
              ))}
            </div>
          </fieldset>
          {problem && <ProblemNotice problem={problem} />}
          <div>
            <Button type="submit" variant="primary" pending={pending} disabled={scopes.length === 0}>
              Create the token
            </Button>
          </div>
        </form>
      </WhenLive>
    </section>
  );
}
