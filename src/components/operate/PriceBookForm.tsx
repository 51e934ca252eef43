/** The next version of the price book: begins as a copy of the newest one. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { creditsField, parseCredits } from '@/components/budgets/credits-field.ts';
import { laneWords } from '@/components/jobs/job-words.ts';
import { Button } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { addPriceBook, type StoredPriceBook } from '@/contracts/operate.ts';
import { currencies, lanes, methodFamilies, type Currency } from '@/domain/pricing/price-book.ts';

const decimals = (amountMinor: number): string => (amountMinor / 100).toFixed(2);
/** "95.00" is 9500; null when it is no price. */
const minor = (text: string): number | null => {
  const match = /^(\d{1,7})(?:\.(\d{1,2}))?$/.exec(text.trim());
  const amount = match ? Number(match[1]) * 100 + Number((match[2] ?? '').padEnd(2, '0')) : 0;
  return amount > 0 ? amount : null;
};
const familyWords = { exact: 'exact', leap: 'leaping' };

export function PriceBookForm({ latest }: { latest: StoredPriceBook }) {
  const [startsAt, setStartsAt] = useState('');
  const [values, setValues] = useState<Record<string, string>>(() => fieldsOf(latest));
  const [pending, setPending] = useState(false);
  const [checked, setChecked] = useState(false);
  const [added, setAdded] = useState<StoredPriceBook | null>(null);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const fault = (fine: boolean, words: string): string | undefined => (checked && !fine ? words : undefined);
  const bind = (name: string) => ({
    value: values[name] ?? '',
    onChange: (event: { target: { value: string } }) =>
      setValues((present) => ({ ...present, [name]: event.target.value })),
  });
  const rateOf = (name: string): number | null => {
    const parsed = parseCredits(values[name] ?? '');
    return parsed.ok ? parsed.microcredits : null;
  };

  async function add(): Promise<void> {
    setChecked(true);
    const rates = Object.fromEntries(
      lanes.map((lane) => [lane, { exact: rateOf(`${lane} exact`), leap: rateOf(`${lane} leap`) }]),
    );
    const packs = latest.packs.map(({ credits }) => ({
      credits,
      netMinor: Object.fromEntries(
        currencies.map((currency) => [currency, minor(values[`${credits} ${currency}`] ?? '')]),
      ) as Record<Currency, number | null>,
    }));
    const amounts = [
      ...Object.values(rates).flatMap(({ exact, leap }) => [exact, leap]),
      ...packs.flatMap(({ netMinor }) => Object.values(netMinor)),
    ];
    if (amounts.includes(null) || startsAt === '') return;
    setPending(true);
    const called = await callApi(addPriceBook, {
      body: {
        startsAt: `${startsAt}:00Z`,
        microcreditsPerMillionEvents: rates as unknown as StoredPriceBook['microcreditsPerMillionEvents'],
        packs: packs as { credits: number; netMinor: Record<Currency, number> }[],
      },
      idempotencyKey: intentKey(),
    });
    setPending(false);
    setProblem(called.ok ? null : called.problem);
    if (called.ok) setAdded(called.value.priceBook);
  }

  if (added)
    return (
      <Notice tone="done" title={`Version ${added.version} is stored`}>
        It holds from {added.startsAt.slice(0, 16).replace('T', ' ')} UTC on.{' '}
        <a className="link" href="">
          Show it
        </a>
      </Notice>
    );
  return (
    <WhenLive>
      <form
        className="flex max-w-3xl flex-col gap-7"
        noValidate
        onSubmit={(event) => {
          event.preventDefault();
          if (!pending) void add();
        }}
      >
        <TextField
          label="In force from"
          hint="In UTC, in the future."
          type="datetime-local"
          value={startsAt}
          error={
            problem?.errors?.find(({ path }) => path === 'startsAt')?.message ??
            fault(startsAt !== '', 'Choose a moment in the future.')
          }
          onChange={(event) => setStartsAt(event.target.value)}
          fieldClassName="max-w-xs"
        />
        <fieldset>
          <legend className="mb-2 font-semibold">Credits per million events</legend>
          <div className="grid gap-4 sm:grid-cols-2">
            {lanes.flatMap((lane) =>
              methodFamilies.map((family) => (
                <TextField
                  key={`${lane} ${family}`}
                  label={`${laneWords[lane].label}, ${familyWords[family]}`}
                  unit="credits"
                  inputMode="decimal"
                  error={fault(rateOf(`${lane} ${family}`) !== null, 'A number above 0, up to six decimals.')}
                  {...bind(`${lane} ${family}`)}
                />
              )),
            )}
          </div>
        </fieldset>
        {latest.packs.map(({ credits }) => (
          <fieldset key={credits}>
            <legend className="mb-2 font-semibold">{credits} credits, before tax</legend>
            <div className="grid gap-4 sm:grid-cols-3">
              {currencies.map((currency) => (
                <TextField
                  key={currency}
                  label={`${credits} credits in ${currency}`}
                  unit={currency}
                  inputMode="decimal"
                  error={fault(minor(values[`${credits} ${currency}`] ?? '') !== null, 'A price such as 95.00.')}
                  {...bind(`${credits} ${currency}`)}
                />
              ))}
            </div>
          </fieldset>
        ))}
        {problem && !problem.errors?.length && <ProblemNotice problem={problem} />}
        <div>
          <Button type="submit" variant="primary" pending={pending}>
            Add the version
          </Button>
        </div>
      </form>
    </WhenLive>
  );
}

const fieldsOf = ({ microcreditsPerMillionEvents, packs }: StoredPriceBook): Record<string, string> => ({
  ...Object.fromEntries(
    lanes.flatMap((lane) =>
      methodFamilies.map((family) => [`${lane} ${family}`, creditsField(microcreditsPerMillionEvents[lane][family])]),
    ),
  ),
  ...Object.fromEntries(
    packs.flatMap(({ credits, prices }) =>
      prices.map(({ currency, amountMinor }) => [`${credits} ${currency}`, decimals(amountMinor)]),
    ),
  ),
});
