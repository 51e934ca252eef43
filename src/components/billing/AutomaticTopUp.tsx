/** Automatic top-up: its state in words, the saved card, the settings, the latest attempts. */
import { useEffect, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Moment, Money } from '@/components/ui/Amounts.tsx';
import { countText } from '@/components/ui/amounts-text.ts';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { Table } from '@/components/ui/Table.tsx';
import { readAutomaticTopUp, type AutomaticTopUpDocument } from '@/contracts/billing.ts';
import type { CreditPack } from '@/domain/pricing/price-book.ts';
import { paths } from '@/paths.ts';
import { AutomaticTopUpForm } from './AutomaticTopUpForm.tsx';
import { attemptWords, automaticWords, topUpIsDue } from './automatic-words.ts';
import { SavedCard } from './SavedCard.tsx';

const refreshMs = 1_500;

export interface AutomaticTopUpProps {
  team: string;
  initial: AutomaticTopUpDocument;
  packs: CreditPack[];
  /** The person has just come back from the page on which a card is saved. */
  returned: boolean;
  mayChange: boolean;
}

export function AutomaticTopUp({ team, initial, packs, returned, mayChange }: AutomaticTopUpProps) {
  const [present, setPresent] = useState(initial);
  const { tone, title, words } = automaticWords(present);
  const waiting = (returned && present.openPageUrl !== null) || topUpIsDue(present);

  async function read(): Promise<void> {
    const called = await callApi(readAutomaticTopUp, { path: { team } });
    if (called.ok) setPresent(called.value.automaticTopUp);
  }
  useEffect(() => {
    if (!waiting) return;
    const timer = setInterval(() => void read(), refreshMs);
    return () => clearInterval(timer);
  }, [waiting]);

  return (
    <div className="flex flex-col gap-10">
      <div className="max-w-prose" role="status">
        <p className="text-xl font-semibold">
          <StateLabel tone={tone}>
            <span className="whitespace-normal">{title}</span>
          </StateLabel>
        </p>
        <p className="mt-1 text-soft">{words}</p>
      </div>
      <div className="grid gap-x-16 gap-y-10 lg:grid-cols-[minmax(0,1fr)_19rem]">
        <section aria-labelledby="settings">
          <h2 id="settings" className="mb-4 text-lg font-semibold">
            Settings
          </h2>
          <AutomaticTopUpForm {...{ team, present, packs, mayChange }} onStored={setPresent} />
        </section>
        <section aria-labelledby="card">
          <h2 id="card" className="mb-4 text-lg font-semibold">
            Saved card
          </h2>
          <SavedCard
            {...{ team, returned, mayChange }}
            card={present.card}
            openPageUrl={present.openPageUrl}
            onRemoved={read}
          />
        </section>
      </div>
      <section aria-labelledby="attempts">
        <h2 id="attempts" className="mb-2 text-lg font-semibold">
          Latest attempts
        </h2>
        {present.attempts.length === 0 ? (
          <p className="border-t border-rule py-2 text-sm text-soft">No automatic top-up has begun yet.</p>
        ) : (
          <Table
            caption="Latest automatic top-ups"
            rows={present.attempts}
            rowKey={({ id }) => id}
            columns={[
              {
                id: 'begun',
                title: 'Begun',
                cell: ({ createdAt }) => <Moment time={createdAt} timeZone={present.timeZone} />,
              },
              {
                id: 'state',
                title: 'State',
                cell: ({ state, problem }) => (
                  <>
                    <StateLabel tone={attemptWords[state].tone}>{attemptWords[state].words}</StateLabel>
                    {problem && <span className="block text-xs text-soft">{problem}</span>}
                  </>
                ),
              },
              { id: 'credits', title: 'Credits', figure: true, cell: ({ credits }) => countText(credits) },
              { id: 'total', title: 'Charged with tax', figure: true, cell: ({ total }) => <Money {...total} /> },
              {
                id: 'invoice',
                title: 'Invoice',
                cell: ({ invoiceId }) =>
                  invoiceId ? (
                    <a className="link" href={paths.invoice(team, invoiceId)}>
                      Open
                    </a>
                  ) : (
                    'None'
                  ),
              },
            ]}
          />
        )}
      </section>
    </div>
  );
}
