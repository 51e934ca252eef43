/** Gives a team credits with a reason. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { parseCredits } from '@/components/budgets/credits-field.ts';
import { Button } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import { exactCreditsText } from '@/components/ui/amounts-text.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { grantGoodwill } from '@/contracts/operate.ts';

const blank = { team: '', credits: '', reason: '' };

export function GoodwillForm() {
  const [fields, setFields] = useState(blank);
  const [key, setKey] = useState<string | null>(null);
  const [pending, setPending] = useState(false);
  const [done, setDone] = useState<string | null>(null);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [checked, setChecked] = useState(false);
  const amount = parseCredits(fields.credits);
  const microcredits = amount.ok ? amount.microcredits : null;
  const bind = (name: keyof typeof blank) => ({
    name,
    required: true,
    value: fields[name],
    onChange: (event: { target: { value: string } }) => {
      setKey(null);
      setDone(null);
      setFields((present) => ({ ...present, [name]: event.target.value }));
    },
  });

  async function grant(): Promise<void> {
    setChecked(true);
    if (microcredits === null) return;
    const idempotencyKey = key ?? intentKey();
    setKey(idempotencyKey);
    setPending(true);
    const { team, reason } = fields;
    const called = await callApi(grantGoodwill, { body: { team, microcredits, reason }, idempotencyKey });
    setPending(false);
    setProblem(called.ok ? null : called.problem);
    if (!called.ok) return;
    setDone(`${exactCreditsText(microcredits)} credits were granted to ${team}.`);
    setKey(null);
    setChecked(false);
    setFields(blank);
  }

  return (
    <WhenLive>
      <form
        className="flex max-w-xl flex-col gap-5"
        onSubmit={(event) => {
          event.preventDefault();
          if (!pending) void grant();
        }}
      >
        <TextField
          label="Team"
          hint="Its name in the address of its pages, such as tarn-fell."
          error={problem?.errors?.find(({ path }) => path === 'team')?.message}
          {...bind('team')}
        />
        <TextField
          label="Amount"
          unit="credits"
          inputMode="decimal"
          error={checked && microcredits === null ? 'A number of credits above 0.' : undefined}
          {...bind('credits')}
        />
        <TextField label="Reason" hint="One sentence that the team can read." maxLength={200} {...bind('reason')} />
        {problem && !problem.errors?.length && <ProblemNotice problem={problem} />}
        {done && <Notice tone="done">{done}</Notice>}
        <div>
          <Button type="submit" variant="primary" pending={pending}>
            Grant the credits
          </Button>
        </div>
      </form>
    </WhenLive>
  );
}
