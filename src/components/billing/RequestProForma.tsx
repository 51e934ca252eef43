/** The form that asks for a pro-forma: a pack, a currency, a PO number, terms. */
import { useRef, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { countText, moneyText } from '@/components/ui/amounts-text.ts';
import { Button, ButtonLink } from '@/components/ui/Button.tsx';
import { SelectField, TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { requestProForma } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { currencies, type CreditPack, type Currency } from '@/domain/pricing/price-book.ts';
import { paths } from '@/paths.ts';
import { currencyWords } from './currency-words.ts';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

const terms = [14, 30, 60] as const;

export function RequestProForma({
  team,
  packs,
  onRequested,
}: {
  team: string;
  packs: CreditPack[];
  onRequested: () => Promise<void>;
}) {
  const [pack, setPack] = useState(packs[0]?.id ?? '');
  const [currency, setCurrency] = useState<Currency>('EUR');
  const [purchaseOrder, setPurchaseOrder] = useState('');
  const [termsDays, setTermsDays] = useState<(typeof terms)[number]>(30);
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [opened, setOpened] = useState<string | null>(null);
  const key = useRef(intentKey());

  async function request(): Promise<void> {
    setPending(true);
    setOpened(null);
    const called = await callApi(requestProForma, {
      path: { team },
      body: { pack, currency, purchaseOrder, termsDays },
      idempotencyKey: key.current,
    });
    key.current = intentKey();
    setPending(false);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setOpened(called.value.proForma.number);
    setPurchaseOrder('');
    await onRequested();
  }

  return (
    <WhenLive>
      <form
        className="flex flex-col gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          if (!pending) void request();
        }}
      >
        <div className="grid gap-4 sm:grid-cols-2">
          <SelectField
            label="Pack"
            value={pack}
            onChange={(event) => setPack(event.target.value)}
            choices={packs.map((one) => ({
              value: one.id,
              label: `${countText(one.credits)} credits · ${moneyText(one.netMinor[currency], currency)} plus tax`,
            }))}
          />
          <SelectField
            label="Currency"
            value={currency}
            onChange={(event) => setCurrency(event.target.value as Currency)}
            choices={currencies.map((code) => ({ value: code, label: `${currencyWords[code]} (${code})` }))}
          />
          <TextField
            label="PO number"
            hint="Stands on the pro-forma and the invoice."
            required
            value={purchaseOrder}
            onChange={(event) => setPurchaseOrder(event.target.value)}
            error={problem?.errors?.find(({ path }) => path === 'purchaseOrder')?.message}
          />
          <SelectField
            label="To be paid within"
            value={String(termsDays)}
            onChange={(event) => setTermsDays(Number(event.target.value) as (typeof terms)[number])}
            choices={terms.map((days) => ({ value: String(days), label: `${days} days` }))}
          />
        </div>
        {problem && (
          <ProblemNotice
            problem={problem}
            action={
              problem.code === 'billing_details_missing' && (
                <ButtonLink size="small" href={paths.billingDetails(team)}>
                  Enter the billing details
                </ButtonLink>
              )
            }
          />
        )}
        {opened && <Notice tone="done">{opened} is open. Download it from the list above.</Notice>}
        <div>
          <Button type="submit" variant="primary" pending={pending}>
            Ask for the pro-forma
          </Button>
        </div>
      </form>
    </WhenLive>
  );
}
