/** API tokens: made with a name and scopes, shown once, revoked at any time. */
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { z } from 'zod';
import { callApi } from '@/components/api/call-api.ts';
import { Moment } from '@/components/ui/Amounts.tsx';
import { ConfirmButton } from '@/components/ui/Dialog.tsx';
import { EmptyState } from '@/components/ui/EmptyState.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { listTokens, revokeToken, type tokenDocument } from '@/contracts/teams.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import type { TokenScope } from '@/domain/teams/permissions.ts';
import { NewToken } from './NewToken.tsx';

export type Token = z.output<typeof tokenDocument>;

export interface TokensProps {
  team: string;
  timeZone: string;
  /** What the person may grant: their own permissions that tokens can have. */
  scopes: TokenScope[];
  suspended: boolean;
  initial: Token[];
}

const shownAtMost = 200;

export function Tokens(props: TokensProps) {
  return (
    <QueryProvider>
      <List {...props} />
    </QueryProvider>
  );
}

function List({ team, timeZone, scopes, suspended, initial }: TokensProps) {
  const queries = useQueryClient();
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const refresh = (): Promise<void> => queries.invalidateQueries({ queryKey: ['tokens', team] });
  const tokens = useQuery({
    queryKey: ['tokens', team],
    initialData: initial,
    queryFn: async () => {
      const called = await callApi(listTokens, { path: { team }, query: { limit: shownAtMost } });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.tokens;
    },
  }).data;
  const live = tokens.filter((token) => !token.revokedAt);
  const revoked = tokens.filter((token) => token.revokedAt);

  async function revoke(token: Token): Promise<void> {
    const called = await callApi(revokeToken, { path: { team, token: token.id } });
    setProblem(called.ok ? null : called.problem);
    await refresh();
  }

  return (
    <div className="flex flex-col gap-10">
      {problem && <ProblemNotice problem={problem} />}
      {live.length === 0 ? (
        <EmptyState title="No API tokens">
          <p>
            A token lets a script do what its scopes name, within your roles: take quotes, launch jobs, fetch archives.
          </p>
        </EmptyState>
      ) : (
        <ul className="-mt-6">
          {live.map((token) => (
            <li
              key={token.id}
              className="flex flex-wrap items-center justify-between gap-x-6 gap-y-2 border-b border-rule py-3"
            >
              <span className="min-w-0">
                <b className="block font-semibold [overflow-wrap:anywhere]">{token.name}</b>
                <span className="block text-sm text-soft">
                  {token.person.name} · {token.scopes.join(', ')}
                </span>
                {token.capMicrocredits !== null && (
                  <span className="block text-sm text-soft">
                    {creditsText(token.usedMicrocredits)} of {creditsText(token.capMicrocredits)} spent or held
                  </span>
                )}
                <span className="block text-sm text-soft">
                  {token.lastUsedAt ? (
                    <>
                      last used <Moment time={token.lastUsedAt} timeZone={timeZone} />
                    </>
                  ) : (
                    'never used'
                  )}
                  {' · '}
                  {token.expiresAt ? (
                    <>
                      until <Moment time={token.expiresAt} timeZone={timeZone} dayOnly />
                    </>
                  ) : (
                    'until revoked'
                  )}
                </span>
              </span>
              <ConfirmButton
                size="small"
                variant="secondary"
                label={`Revoke ${token.name}`}
                title={`Revoke “${token.name}”`}
                question="Scripts that use it stop working at once. Jobs already running go on."
                confirm="Revoke the token"
                onConfirm={() => revoke(token)}
              >
                Revoke
              </ConfirmButton>
            </li>
          ))}
        </ul>
      )}
      {!suspended && <NewToken team={team} scopes={scopes} onCreated={refresh} />}
      {revoked.length > 0 && (
        <section aria-labelledby="revoked">
          <h2 id="revoked" className="mb-2 text-lg font-semibold">
            Revoked
          </h2>
          <ul className="border-t border-rule text-sm">
            {revoked.map((token) => (
              <li key={token.id} className="flex flex-wrap justify-between gap-x-6 border-b border-rule py-2">
                <span className="[overflow-wrap:anywhere]">
                  {token.name} · {token.person.name}
                </span>
                {token.revokedAt && (
                  <StateLabel tone="over">
                    <Moment time={token.revokedAt} timeZone={timeZone} />
                  </StateLabel>
                )}
              </li>
            ))}
          </ul>
        </section>
      )}
    </div>
  );
}
