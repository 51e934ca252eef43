/** What became of a top-up, from our own database: asked again and again until it is decided. */
import { useQuery } from '@tanstack/react-query';
import { useEffect, useRef } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { countText, moneyText } from '@/components/ui/amounts-text.ts';
import { announceBalanceChange } from '@/components/ui/column-events.ts';
import { ButtonLink } from '@/components/ui/Button.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { Spinner } from '@/components/ui/Progress.tsx';
import { readTopUp, type TopUpDocument } from '@/contracts/billing.ts';
import { paths } from '@/paths.ts';

const refreshMs = 1_500;
const undecided = (state: TopUpDocument['state'] | undefined): boolean =>
  state === undefined || state === 'pending' || state === 'processing';

export interface TopUpReturnProps {
  team: string;
  topUpId: string;
  /** The person came back without paying. */
  abandoned: boolean;
}

export function TopUpReturn(props: TopUpReturnProps) {
  return (
    <QueryProvider>
      <State {...props} />
    </QueryProvider>
  );
}

function State({ team, topUpId, abandoned }: TopUpReturnProps) {
  const { data, error } = useQuery({
    queryKey: ['top-up', team, topUpId],
    queryFn: async ({ signal }) => {
      const called = await callApi(readTopUp, { path: { team, topUp: topUpId }, signal });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.topUp;
    },
    refetchInterval: (query) => (undecided(query.state.data?.state) && !query.state.error ? refreshMs : false),
  });
  const state = data?.state;
  const announced = useRef(false);
  useEffect(() => {
    if (state === 'paid' && !announced.current) {
      announced.current = true;
      announceBalanceChange();
    }
  }, [state]);

  if (error)
    return (
      <Notice tone="caution" title="This top-up could not be read">
        {error.message}
      </Notice>
    );
  if (!data)
    return (
      <Notice title="Looking up your payment">
        <Spinner />
      </Notice>
    );
  const what = `${countText(data.credits)} credits for ${moneyText(data.total.amountMinor, data.total.currency)}`;
  if (state === 'paid')
    return (
      <Notice
        tone="done"
        title={`Paid: ${what}`}
        action={
          data.invoiceId && (
            <ButtonLink size="small" href={paths.invoice(team, data.invoiceId)}>
              Open the invoice
            </ButtonLink>
          )
        }
      >
        The credits are in the column and the receipt is on its way by e-mail.
      </Notice>
    );
  if (state === 'failed' || state === 'expired')
    return (
      <Notice tone="failure" title={state === 'failed' ? `Not paid: ${what}` : `Not paid in time: ${what}`}>
        {data.problem ?? 'No money was taken.'} Choose a pack to begin again.
      </Notice>
    );
  const goOn = data.checkoutUrl && (
    <ButtonLink size="small" href={data.checkoutUrl}>
      Go on paying
    </ButtonLink>
  );
  if (state === 'processing')
    return (
      <Notice tone="information" title={`Under way: ${what}`}>
        This way of paying settles later. The credits come when it has; you can leave this page.
      </Notice>
    );
  if (abandoned)
    return (
      <Notice tone="caution" title={`Not paid yet: ${what}`} action={goOn}>
        {data.problem ?? 'You came back before paying, so no money was taken.'}
      </Notice>
    );
  return (
    <Notice tone="information" title={`Waiting for the payment: ${what}`} action={goOn}>
      <span className="inline-flex items-center gap-2">
        <Spinner /> This page shows the credits as soon as the payment service confirms it.
      </span>
    </Notice>
  );
}
