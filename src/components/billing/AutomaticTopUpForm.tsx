/** When to buy, what, and how much at most in a month. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { creditsField, parseCredits } from '@/components/budgets/credits-field.ts';
import { countText, moneyText } from '@/components/ui/amounts-text.ts';
import { Button } from '@/components/ui/Button.tsx';
import { SelectField, TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import { setAutomaticTopUp, type AutomaticTopUpDocument } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { currencies, type CreditPack, type Currency } from '@/domain/pricing/price-book.ts';
import { currencyWords } from './currency-words.ts';
import { moneyField, parseMoney } from './money-field.ts';

export function AutomaticTopUpForm({
  team,
  present,
  packs,
  mayChange,
  onStored,
}: {
  team: string;
  present: AutomaticTopUpDocument;
  packs: CreditPack[];
  mayChange: boolean;
  onStored: (stored: AutomaticTopUpDocument) => void;
}) {
  const { settings, state, card, month } = present;
  const [threshold, setThreshold] = useState(creditsField(settings?.thresholdMicrocredits ?? null));
  const [pack, setPack] = useState(settings?.pack ?? packs[1]?.id ?? packs[0]?.id ?? '');
  const [currency, setCurrency] = useState((settings?.monthlyCeiling.currency ?? 'EUR') as Currency);
  const [ceiling, setCeiling] = useState(settings ? moneyField(settings.monthlyCeiling.amountMinor) : '');
  const [saving, setSaving] = useState<'on' | 'off' | null>(null);
  const [done, setDone] = useState<string | null>(null);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [checked, setChecked] = useState(false);
  const parsed = parseCredits(threshold);
  const thresholdMicrocredits = parsed.ok ? parsed.microcredits : null;
  const monthlyCeilingMinor = parseMoney(ceiling);
  const fault = (path: string): string | undefined => problem?.errors?.find((one) => one.path === path)?.message;
  const change = (set: (text: string) => void) => (event: { target: { value: string } }) => {
    setDone(null);
    setProblem(null);
    set(event.target.value);
  };

  async function store(on: boolean): Promise<void> {
    setChecked(true);
    if (thresholdMicrocredits === null || monthlyCeilingMinor === null || saving) return;
    setSaving(on ? 'on' : 'off');
    const called = await callApi(setAutomaticTopUp, {
      path: { team },
      body: { on, thresholdMicrocredits, pack, currency, monthlyCeilingMinor },
    });
    setSaving(null);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setDone(on ? 'Automatic top-up is on.' : 'Automatic top-up is off. The settings are kept.');
    onStored(called.value.automaticTopUp);
  }

  return (
    <WhenLive>
      <form
        className="flex max-w-2xl flex-col gap-5"
        noValidate
        onSubmit={(event) => {
          event.preventDefault();
          void store(true);
        }}
      >
        <div className="grid gap-5 sm:grid-cols-2">
          <TextField
            label="Buy when less is available than"
            unit="credits"
            inputMode="decimal"
            value={threshold}
            disabled={!mayChange}
            error={checked && thresholdMicrocredits === null ? 'A number of credits above 0.' : undefined}
            onChange={change(setThreshold)}
          />
          <SelectField
            label="Pack"
            value={pack}
            disabled={!mayChange}
            choices={packs.map((one) => ({
              value: one.id,
              label: `${countText(one.credits)} credits, ${moneyText(one.netMinor[currency], currency)} before tax`,
            }))}
            onChange={change(setPack)}
          />
          <SelectField
            label="Currency"
            value={currency}
            disabled={!mayChange}
            choices={currencies.map((code) => ({ value: code, label: `${currencyWords[code]} (${code})` }))}
            onChange={change((text) => setCurrency(text as Currency))}
          />
          <TextField
            label="Charge at most per month"
            hint={`Tax included, by calendar months of the team’s time zone, ${present.timeZone}; now ${month}.`}
            unit={currency}
            inputMode="decimal"
            value={ceiling}
            disabled={!mayChange}
            error={
              checked && monthlyCeilingMinor === null ? 'An amount above 0, such as 350.' : fault('monthlyCeilingMinor')
            }
            onChange={change(setCeiling)}
          />
        </div>
        {problem && !problem.errors?.length && <ProblemNotice problem={problem} />}
        {done && <Notice tone="done">{done}</Notice>}
        {mayChange ? (
          <>
            <div className="flex flex-wrap gap-2">
              <Button type="submit" variant="primary" pending={saving === 'on'} disabled={!card}>
                {state === 'on' ? 'Save the settings' : 'Switch it on'}
              </Button>
              {state === 'on' && (
                <Button pending={saving === 'off'} onClick={() => void store(false)}>
                  Switch it off
                </Button>
              )}
            </div>
            <p className="text-xs text-soft">
              {card
                ? 'By switching it on you agree that the saved card is charged without asking again. Each charge has its invoice and receipt. If one does not pass, it is switched off and owners and the billing address get an e-mail.'
                : 'Save a card first.'}
            </p>
          </>
        ) : (
          <p className="text-sm text-soft">Owners and finance admins change this.</p>
        )}
      </form>
    </WhenLive>
  );
}
