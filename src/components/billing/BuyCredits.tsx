/** Choose a pack, see what it costs before tax, go on to the payment service's page. */
import { useRef, useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { countText, moneyText } from '@/components/ui/amounts-text.ts';
import { Button } from '@/components/ui/Button.tsx';
import { RadioField, SelectField } from '@/components/ui/Field.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { startTopUp } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { currencies, type CreditPack, type Currency } from '@/domain/pricing/price-book.ts';
import { currencyWords } from './currency-words.ts';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

export interface BuyCreditsProps {
  team: string;
  packs: CreditPack[];
}

/** What a credit costs in a pack, in hundredths of the smallest money unit's text, for comparing packs. */
const perCredit = (pack: CreditPack, currency: Currency): string =>
  moneyText(Math.round(pack.netMinor[currency] / pack.credits), currency);

export function BuyCredits({ team, packs }: BuyCreditsProps) {
  const [packId, setPackId] = useState(packs[1]?.id ?? packs[0]?.id ?? '');
  const [currency, setCurrency] = useState<Currency>('EUR');
  const [pending, setPending] = useState(false);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const intent = useRef({ of: '', key: '' });
  const pack = packs.find(({ id }) => id === packId);

  async function buy(): Promise<void> {
    setPending(true);
    setProblem(null);
    const of = `${packId} ${currency}`;
    if (intent.current.of !== of) intent.current = { of, key: intentKey() };
    const called = await callApi(startTopUp, {
      path: { team },
      body: { pack: packId, currency },
      idempotencyKey: intent.current.key,
    });
    if (called.ok) {
      window.location.assign(called.value.checkoutUrl);
      return;
    }
    setProblem(called.problem);
    setPending(false);
  }

  return (
    <WhenLive>
      <form
        className="flex flex-col gap-5"
        onSubmit={(event) => {
          event.preventDefault();
          if (!pending) void buy();
        }}
      >
        <RadioField
          legend="Pack"
          name="pack"
          value={packId}
          onChange={setPackId}
          choices={packs.map((one) => ({
            value: one.id,
            label: `${countText(one.credits)} credits`,
            hint: `${moneyText(one.netMinor[currency], currency)} · ${perCredit(one, currency)} a credit`,
          }))}
        />
        <SelectField
          label="Currency"
          value={currency}
          onChange={(event) => setCurrency(event.target.value as Currency)}
          choices={currencies.map((code) => ({ value: code, label: `${currencyWords[code]} (${code})` }))}
          fieldClassName="max-w-[16rem]"
        />
        {problem && <ProblemNotice problem={problem} />}
        <div>
          <Button type="submit" variant="primary" pending={pending} disabled={!pack}>
            {pack ? `Go on to pay ${moneyText(pack.netMinor[currency], currency)} plus tax` : 'Choose a pack'}
          </Button>
          <p className="mt-2 text-xs text-soft">
            You pay on the payment service’s page. Credits come when the payment is confirmed, with a receipt and an
            invoice. The tax treatment shown is configuration, not advice.
          </p>
        </div>
      </form>
    </WhenLive>
  );
}
